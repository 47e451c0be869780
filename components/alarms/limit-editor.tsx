import { useState } from 'react';
import type { AlarmRule } from '#shared/contract/alarms.ts';
import { usePutAlarmRule } from '../../hooks/use-alarms.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Checkbox } from '../ui/checkbox.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';
import { Text } from '../ui/text.tsx';
import { limitFormOf, type LimitField, readLimitForm } from './limit-form.ts';
import { limitMeanings, scheduleLimitsSentence } from './limit-words.ts';

const sources = [
  { value: 'schedule', label: 'From the schedule', hint: 'follows every change of the dose' },
  { value: 'numbers', label: 'Numbers of my own', hint: 'stay as they are when the dose changes' },
] as const;

/** Sets one limit. What holds now stands in the fields; nothing is saved half. */
export function LimitEditor({
  systemId,
  rule,
  isOwner,
  onDone,
}: {
  systemId: string;
  rule: AlarmRule;
  isOwner: boolean;
  onDone: () => void;
}) {
  const put = usePutAlarmRule(systemId);
  const [form, setForm] = useState(() => limitFormOf(rule));
  const [errors, setErrors] = useState<Partial<Record<LimitField, string>>>({});
  const takesNumbers = rule.unit === 'mL';
  const scheduleLimits = scheduleLimitsSentence(rule);

  function save(): void {
    const read = readLimitForm(rule, form);
    setErrors(read.ok ? {} : read.errors);
    if (read.ok) put.mutate({ code: rule.code, body: read.body }, { onSuccess: onDone });
  }

  return (
    <Form name="Limit" onSubmit={save}>
      <Text>{limitMeanings[rule.code]}</Text>
      {takesNumbers ? (
        <RadioGroup
          legend="Limits"
          value={form.fromSchedule ? 'schedule' : 'numbers'}
          onChange={(source) => setForm({ ...form, fromSchedule: source === 'schedule' })}
          options={sources}
        />
      ) : null}
      {takesNumbers && scheduleLimits !== null ? <Text figures>{scheduleLimits}</Text> : null}
      {takesNumbers && !form.fromSchedule ? (
        <>
          <DecimalField
            label="Soft limit"
            unit="mL"
            text={form.softText}
            onChange={(softText) => setForm({ ...form, softText })}
            hint="Over it an alarm shows here."
            error={errors.soft ?? fieldError(put.error, 'soft')}
          />
          <DecimalField
            label="Hard limit"
            unit="mL"
            text={form.hardText}
            onChange={(hardText) => setForm({ ...form, hardText })}
            hint="Over it dosing is stopped."
            error={errors.hard ?? fieldError(put.error, 'hard')}
          />
        </>
      ) : null}
      <Checkbox label="Watch this" checked={form.enabled} onChange={(enabled) => setForm({ ...form, enabled })} />
      {rule.interlock || isOwner ? (
        <Checkbox
          label="Stop dosing when the hard limit is passed"
          hint={isOwner ? undefined : 'Only the owner may switch this off.'}
          checked={form.interlock}
          onChange={(interlock) => setForm({ ...form, interlock })}
        />
      ) : null}
      {put.isError && !isSaidAtFields(put.error) ? <Notice error={put.error} /> : null}
      <div className="row-of-buttons">
        <Button kind="primary" submit busy={put.isPending}>
          Save
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </Form>
  );
}
