import { useState } from 'react';
import type { Reservoir } from '#shared/contract/rig.ts';
import { isAtLeast } from '#shared/domain/role.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useReservoirs } from '../../hooks/use-rig.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatDay } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { BottleForm } from './bottle-form.tsx';
import { RefillForm } from './refill-form.tsx';
import { RigPart, type RigPartProps } from './rig-part.tsx';

/** The bottles that heads draw from, what should be left in them, and refills. */
export function BottlesPart({ system, mayChange }: RigPartProps) {
  const reservoirs = useReservoirs(system.id);
  const nowMs = useNow(60_000);
  const [isAdding, setAdding] = useState(false);
  const [refilled, setRefilled] = useState<Reservoir | null>(null);

  function leftWords(reservoir: Reservoir): string {
    if (reservoir.remainingMl === null) return 'No refill written down yet, so what is left is not known.';
    const left = `${formatMl(Math.max(0, reservoir.remainingMl))} of ${formatMl(reservoir.capacityMl)} should be left`;
    return reservoir.lastsUntil === null ? `${left}.` : `${left}; lasts to ${formatDay(reservoir.lastsUntil, system.timeZone, nowMs)}.`;
  }

  return (
    <RigPart title="Bottles" action={mayChange ? <Button onPress={() => setAdding(true)}>Add a bottle</Button> : null}>
      {reservoirs.isError ? <Notice error={reservoirs.error} onRetry={() => void reservoirs.refetch()} /> : null}
      {reservoirs.data?.length === 0 ? (
        <EmptyState sentence="No bottle yet. A small one is the last defence: it cannot give more than it holds." />
      ) : null}
      {reservoirs.data?.map((reservoir) => (
        <div key={reservoir.id} className="item">
          <Text bold>{reservoir.name}</Text>
          <Text>{leftWords(reservoir)}</Text>
          {isAtLeast(system.role, 'sitter') ? (
            <div className="row-of-buttons">
              <Button name={`Refill ${reservoir.name}`} onPress={() => setRefilled(reservoir)}>
                Refill
              </Button>
            </div>
          ) : null}
        </div>
      ))}
      <Sheet title="Add a bottle" open={isAdding} onClose={() => setAdding(false)}>
        <BottleForm systemId={system.id} onDone={() => setAdding(false)} />
      </Sheet>
      <Sheet title={refilled === null ? 'Refill' : `Refill ${refilled.name}`} open={refilled !== null} onClose={() => setRefilled(null)}>
        {refilled === null ? null : <RefillForm key={refilled.id} system={system} reservoir={refilled} onDone={() => setRefilled(null)} />}
      </Sheet>
    </RigPart>
  );
}
