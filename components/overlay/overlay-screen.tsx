import { useSystem } from '../../hooks/use-systems.ts';
import { useSeries } from '../../hooks/use-telemetry.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Text } from '../ui/text.tsx';

/** Tests, doses, events and probes over one time axis. */
export function OverlayScreen({ systemId }: { systemId: string }) {
  const series = useSeries(systemId);
  useTitle('Overlay', useSystem(systemId).data?.name);
  return (
    <Screen wide>
      <Heading level={1}>Overlay</Heading>
      {series.isError ? <Notice error={series.error} onRetry={() => void series.refetch()} /> : null}
      <Text soft>{series.data === undefined ? ' ' : `${series.data.length} measured series.`}</Text>
    </Screen>
  );
}
