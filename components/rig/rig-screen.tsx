import { useDevices } from '../../hooks/use-rig.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Text } from '../ui/text.tsx';

/** The equipment of a system. */
export function RigScreen({ systemId }: { systemId: string }) {
  const devices = useDevices(systemId);
  useTitle('Rig', useSystem(systemId).data?.name);
  return (
    <Screen>
      <Heading level={1}>Rig</Heading>
      {devices.isError ? <Notice error={devices.error} onRetry={() => void devices.refetch()} /> : null}
      {devices.data?.map((device) => (
        <Text key={device.id}>{`${device.name}, ${device.kind}`}</Text>
      ))}
    </Screen>
  );
}
