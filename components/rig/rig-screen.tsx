import { isAtLeast } from '#shared/domain/role.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { BottlesPart } from './bottles-part.tsx';
import { DevicesPart } from './devices-part.tsx';
import { HeadsPart } from './heads-part.tsx';
import { MessagesPart } from './messages-part.tsx';
import { ProbesPart } from './probes-part.tsx';
import { ProductsPart } from './products-part.tsx';
import { WaterPart } from './water-part.tsx';

/** The equipment of a system: pumps and probes, heads with their schedule, bottles, products, water; raw messages last. */
export function RigScreen({ systemId }: { systemId: string }) {
  const query = useSystem(systemId);
  const system = query.data;
  useTitle('Rig', system?.name);
  if (system === undefined) {
    return (
      <Screen>
        <Heading level={1}>Rig</Heading>
        {query.isError ? (
          <Notice error={query.error} onRetry={() => void query.refetch()} />
        ) : (
          <Skeleton lines={8} name="Loading the rig" />
        )}
      </Screen>
    );
  }
  const part = { system, mayChange: isAtLeast(system.role, 'keeper') };
  return (
    <Screen>
      <Heading level={1}>Rig</Heading>
      <DevicesPart {...part} />
      <HeadsPart {...part} />
      <BottlesPart {...part} />
      <ProductsPart {...part} />
      <ProbesPart {...part} />
      <WaterPart {...part} />
      {isAtLeast(system.role, 'sitter') ? <MessagesPart system={system} /> : null}
    </Screen>
  );
}
