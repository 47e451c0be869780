import { useBreakpoint } from '../../hooks/use-breakpoint.ts';
import { useFreshness } from '../../hooks/use-freshness.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { systemSentence } from '../../lib/sentences/system-sentence.ts';
import { Heading } from '../ui/heading.tsx';
import { Screen } from '../ui/screen.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';

/** The system now. */
export function WatchScreen({ systemId }: { systemId: string }) {
  const system = useSystem(systemId);
  const nowMs = useNow();
  const { staleSinceMs } = useFreshness();
  const isPhone = useBreakpoint() === 'phone';
  useTitle('Watch', system.data?.name);
  return (
    <Screen>
      <Heading level={1}>{system.data?.name ?? 'Watch'}</Heading>
      {system.data === undefined ? (
        <Skeleton lines={3} name="Loading the system" />
      ) : (
        <Text variant={isPhone ? 'sentence' : 'sentenceWide'}>{systemSentence(system.data, nowMs, staleSinceMs)}</Text>
      )}
    </Screen>
  );
}
