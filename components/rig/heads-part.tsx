import { useState } from 'react';
import type { Head } from '#shared/contract/rig.ts';
import { useHeads, useReservoirs } from '../../hooks/use-rig.ts';
import { useProducts } from '../../hooks/use-sites.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { StateWord } from '../ui/state-word.tsx';
import { Text } from '../ui/text.tsx';
import { HeadForm } from './head-form.tsx';
import { headName, headRateWords, headScheduleWords } from './head-words.ts';
import { RigPart, type RigPartProps } from './rig-part.tsx';
import { ScheduleForm } from './schedule-form.tsx';

type Open = { what: 'add' } | { what: 'edit' | 'schedule'; head: Head } | null;

/** What each head of a pump is used for, and its schedule. */
export function HeadsPart({ system, mayChange }: RigPartProps) {
  const heads = useHeads(system.id);
  const reservoirs = useReservoirs(system.id).data ?? [];
  const products = useProducts(system.siteId).data ?? [];
  const [open, setOpen] = useState<Open>(null);
  const close = () => setOpen(null);
  const productName = (head: Head) => products.find((product) => product.id === head.productId)?.name ?? 'no product said';
  const bottleName = (head: Head) => reservoirs.find((reservoir) => reservoir.id === head.reservoirId)?.name ?? 'no bottle said';
  return (
    <RigPart title="Heads" action={mayChange ? <Button onPress={() => setOpen({ what: 'add' })}>Put a head to use</Button> : null}>
      {heads.isError ? <Notice error={heads.error} onRetry={() => void heads.refetch()} /> : null}
      {heads.data?.length === 0 ? (
        <EmptyState sentence="No head in use. A pump that runs without one here counts as carbon of unknown strength." />
      ) : null}
      {heads.data?.map((head) => (
        <div key={head.id} className="item">
          <div className="item-head">
            <Text bold>{headName(head)}</Text>
            {head.stop === null ? null : (
              <StateWord mark={head.stop.confirmedAt === null ? 'due' : 'stopped'}>
                {`${head.stop.confirmedAt === null ? 'asked to stop, not confirmed' : 'stopped'}${head.stop.cause === 'interlock' ? ', by an alarm' : ''}`}
              </StateWord>
            )}
          </div>
          <Text>{head.kind === 'carbon' ? `Carbon: ${productName(head)}, from ${bottleName(head)}.` : 'Not carbon.'}</Text>
          <Text>{headScheduleWords(head)}</Text>
          <Text soft>{headRateWords(head)}</Text>
          {mayChange ? (
            <div className="row-of-buttons">
              <Button name={`Schedule of ${headName(head)}`} onPress={() => setOpen({ what: 'schedule', head })}>
                Schedule
              </Button>
              <Button kind="quiet" name={`Change ${headName(head)}`} onPress={() => setOpen({ what: 'edit', head })}>
                Change
              </Button>
            </div>
          ) : null}
        </div>
      ))}
      <Sheet title="Put a head to use" open={open?.what === 'add'} onClose={close}>
        <HeadForm system={system} head={null} onDone={close} />
      </Sheet>
      <Sheet title={open?.what === 'edit' ? headName(open.head) : 'Head'} open={open?.what === 'edit'} onClose={close}>
        {open?.what === 'edit' ? <HeadForm key={open.head.id} system={system} head={open.head} onDone={close} /> : null}
      </Sheet>
      <Sheet title="Schedule" open={open?.what === 'schedule'} onClose={close}>
        {open?.what === 'schedule' ? <ScheduleForm key={open.head.id} system={system} head={open.head} onDone={close} /> : null}
      </Sheet>
    </RigPart>
  );
}
