import { useState } from 'react';
import type { Alarm } from '#shared/contract/alarms.ts';
import { alarmRuleDefaults, longestShelfMs } from '#shared/domain/alarm-rules.ts';
import { useShelve } from '../../hooks/use-alarms.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';
import { Text } from '../ui/text.tsx';

const hourMs = 3_600_000;
const spans = [
  { value: '1', label: '1 hour' },
  { value: '4', label: '4 hours' },
  { value: '8', label: '8 hours' },
  { value: '24', label: '1 day' },
  { value: '168', label: '7 days' },
] as const;

/** Keeps an alarm quiet for a while, with a reason. It silences the call, never the stop. */
export function ShelveForm({ alarm, onDone }: { alarm: Alarm; onDone: () => void }) {
  const shelve = useShelve(alarm.id);
  const [hours, setHours] = useState<(typeof spans)[number]['value']>('1');
  const [reason, setReason] = useState('');
  const isInterlock = alarm.latched || (alarm.limitKind === 'hard' && alarmRuleDefaults[alarm.code].interlock);
  const offered = spans.filter((span) => Number(span.value) * hourMs <= longestShelfMs(isInterlock));
  function send(): void {
    // A minute short of the full span, so that the longest one is not refused for the time that the request takes.
    const untilMs = Date.now() + Number(hours) * hourMs - 60_000;
    shelve.mutate({ until: new Date(untilMs).toISOString(), reason }, { onSuccess: onDone });
  }
  return (
    <Form name="Keep quiet" onSubmit={send}>
      {isInterlock ? <Text>This keeps the alarm quiet. What is stopped stays stopped.</Text> : null}
      <RadioGroup legend="For how long?" value={hours} onChange={setHours} options={offered} />
      <Field label="Why?" value={reason} onChange={setReason} maxLength={500} required error={fieldError(shelve.error, 'reason')} />
      {shelve.isError && !isSaidAtFields(shelve.error) ? <Notice error={shelve.error} /> : null}
      <div className="row-of-buttons">
        <Button kind="primary" submit busy={shelve.isPending}>
          Keep quiet
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </Form>
  );
}
