import { useState } from 'react';
import type { Head } from '#shared/contract/rig.ts';
import type { System } from '#shared/contract/systems.ts';
import { usePutSchedule } from '../../hooks/use-rig.ts';
import { problemFrom } from '../../lib/api-problem.ts';
import { isSaidAtFields } from '../../lib/field-errors.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { Checkbox } from '../ui/checkbox.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Stepper } from '../ui/stepper.tsx';
import { Text } from '../ui/text.tsx';

/** What the server says of the form that belongs to none of its fields here. */
function problemWords(error: unknown): string[] {
  const problem = problemFrom(error);
  return problem.kind === 'bad-input' ? problem.errors.map((one) => one.message) : [];
}

/** A dose a day in portions, set by hand. Above the ceiling it takes the owner and a written reason. */
export function ScheduleForm({ system, head, onDone }: { system: System; head: Head; onDone: () => void }) {
  const put = usePutSchedule(system.id);
  const [dose, setDose] = useState(head.schedule === null ? '' : String(Math.round(head.schedule.mlPerDay * 1000) / 1000));
  const [slotsText, setSlotsText] = useState(String(head.schedule?.slotsUtcMin.length || 12));
  const [reason, setReason] = useState('');
  const [isCeilingConfirmed, setCeilingConfirmed] = useState(false);
  const [isMissing, setMissing] = useState(false);
  const mlPerDay = parseDecimal(dose);
  const slots = parseDecimal(slotsText);
  const isAboveCeiling = put.isError && problemFrom(put.error).kind === 'conflict';
  const isOwner = system.role === 'owner';

  function save(): void {
    setMissing(true);
    if (!mlPerDay.ok || !slots.ok) return;
    put.mutate(
      {
        heads: [{ headId: head.id, mlPerDay: mlPerDay.value, slots: slots.value }],
        override: reason.trim() === '' ? undefined : { reason },
        confirmUnknownCeiling: isCeilingConfirmed,
      },
      { onSuccess: onDone },
    );
  }

  return (
    <Form name="Schedule" onSubmit={save}>
      <Text>
        The portions are spread over the hours in which the system has light. A pump obeys at once, also when this page is closed.
      </Text>
      <DecimalField
        label="Dose a day"
        unit="mL"
        text={dose}
        onChange={setDose}
        hint="0 for no dose."
        error={isMissing && !mlPerDay.ok ? 'Give mL a day' : null}
      />
      <Stepper label="Portions a day" text={slotsText} onChange={setSlotsText} step={1} decimals={0} min={1} startAt={12} />
      {mlPerDay.ok && slots.ok && slots.value >= 1 && mlPerDay.value > 0 ? (
        <Text
          soft
        >{`About ${formatMl(mlPerDay.value / slots.value)} a portion; fewer, larger portions if the pump cannot give that little.`}</Text>
      ) : null}
      {put.isError && isSaidAtFields(put.error) ? problemWords(put.error).map((words) => <Notice key={words} sentence={words} />) : null}
      {put.isError && !isSaidAtFields(put.error) ? <Notice error={put.error} /> : null}
      {put.isError && isSaidAtFields(put.error) ? (
        <Checkbox
          label="I know the ceiling from elsewhere"
          hint="Where neither label nor composition tells how much this water may get."
          checked={isCeilingConfirmed}
          onChange={setCeilingConfirmed}
        />
      ) : null}
      {isAboveCeiling && isOwner ? (
        <Field
          label="Why above the ceiling?"
          value={reason}
          onChange={setReason}
          lines={3}
          maxLength={1000}
          hint="At least 10 characters; kept on record."
        />
      ) : null}
      <div className="row-of-buttons">
        <Button kind="primary" submit busy={put.isPending}>
          Send to the pump
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </Form>
  );
}
