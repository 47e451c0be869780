import { useState } from 'react';
import type { Alarm } from '#shared/contract/alarms.ts';
import type { System } from '#shared/contract/systems.ts';
import { isAtLeast } from '#shared/domain/role.ts';
import { useAcknowledge } from '../../hooks/use-alarms.ts';
import { formatNear } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { ResetForm } from './reset-form.tsx';
import { ShelveForm } from './shelve-form.tsx';
import { TakeForm } from './take-form.tsx';

type Open = 'take' | 'shelve' | 'reset' | null;
const titles = { take: 'I am on it', shelve: 'Keep quiet', reset: 'Reset' } as const;

/** What a person may do with an alarm. Who may not is told who may, in place of a button that refuses. */
export function AlarmActions({ alarm, system, nowMs }: { alarm: Alarm; system: System; nowMs: number }) {
  const acknowledge = useAcknowledge(alarm.id);
  const [open, setOpen] = useState<Open>(null);
  const close = () => setOpen(null);
  if (!isAtLeast(system.role, 'sitter') || alarm.state === 'normal') return null;
  const isKeeper = isAtLeast(system.role, 'keeper');
  return (
    <section aria-label="What you can do" style={{ display: 'flex', flexDirection: 'column', gap: 12 }}>
      <Text bold={alarm.taken !== null}>
        {alarm.taken === null
          ? 'Nobody is on it yet.'
          : `${alarm.taken.name} is on it, there by ${formatNear(alarm.taken.arriveAt, system.timeZone, nowMs)}.`}
      </Text>
      <div className="row-of-buttons">
        <Button kind={alarm.taken === null ? 'primary' : 'secondary'} onPress={() => setOpen('take')}>
          I am on it
        </Button>
        {alarm.acknowledged ? null : (
          <Button busy={acknowledge.isPending} onPress={() => acknowledge.mutate()}>
            Acknowledge
          </Button>
        )}
        {isKeeper && alarm.latched ? <Button onPress={() => setOpen('reset')}>Reset</Button> : null}
        {isKeeper && alarm.state !== 'shelved' ? <Button onPress={() => setOpen('shelve')}>Keep quiet</Button> : null}
      </div>
      {acknowledge.isError ? <Notice error={acknowledge.error} /> : null}
      {alarm.latched ? (
        <Text soft>
          {isKeeper
            ? 'Dosing stays stopped until you reset this with its cause, and resume. A reset by itself starts nothing.'
            : 'Dosing stays stopped until a keeper or the owner resets this. Acknowledging it starts nothing.'}
        </Text>
      ) : null}
      <Sheet title={open === null ? '' : titles[open]} open={open !== null} onClose={close}>
        {open === 'take' ? <TakeForm alarmId={alarm.id} onDone={close} /> : null}
        {open === 'shelve' ? <ShelveForm alarm={alarm} onDone={close} /> : null}
        {open === 'reset' ? <ResetForm alarmId={alarm.id} onDone={close} /> : null}
      </Sheet>
    </section>
  );
}
