import { useTests } from '../../hooks/use-records.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Text } from '../ui/text.tsx';

/** Tests by hand. */
export function TestsScreen({ systemId }: { systemId: string }) {
  const tests = useTests(systemId);
  useTitle('Tests', useSystem(systemId).data?.name);
  return (
    <Screen>
      <Heading level={1}>Tests</Heading>
      {tests.isError ? <Notice error={tests.error} onRetry={() => void tests.refetch()} /> : null}
      <Text soft>{tests.data === undefined ? ' ' : `${tests.data.length} written down.`}</Text>
    </Screen>
  );
}
