import { useState } from 'react';
import type { Test } from '#shared/contract/records.ts';
import { useUpdateTest } from '../../hooks/use-records.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Text } from '../ui/text.tsx';
import { ResultInput } from './result-input.tsx';
import { localTime, readLocalTime, readResult, type ResultDraft } from './test-form.ts';

/** Corrects one test, or takes it out. What it was before stays on record. */
export function EditTest({
  test,
  timeZone,
  tests,
  onSaved,
  onDelete,
}: {
  test: Test;
  timeZone: string;
  tests: readonly Test[];
  onSaved: () => void;
  onDelete: () => void;
}) {
  const update = useUpdateTest(test.systemId);
  const [draft, setDraft] = useState<ResultDraft>({ text: String(test.value), unit: test.unit, below: test.below });
  const [at, setAt] = useState(() => localTime(Date.parse(test.at), timeZone));
  const [note, setNote] = useState(test.note);
  const [error, setError] = useState<string | null>(null);
  const [atError, setAtError] = useState<string | null>(null);

  function save(): void {
    const read = readResult(test.quantity, draft);
    const movedTo = at === localTime(Date.parse(test.at), timeZone) ? test.at : readLocalTime(at, timeZone);
    setError(read.ok ? null : read.error);
    setAtError(movedTo === null ? 'Give the day and time of the test' : null);
    if (!read.ok || movedTo === null) return;
    const body = { value: read.value, unit: draft.unit, below: draft.below, at: movedTo, note };
    update.mutate({ testId: test.id, body }, { onSuccess: onSaved });
  }

  return (
    <Form name="Correct a test" onSubmit={save}>
      <Text soft>{`Written down by ${test.by}${test.edited ? '; corrected since' : ''}.`}</Text>
      <ResultInput
        quantity={test.quantity}
        draft={draft}
        onChange={setDraft}
        tests={tests.filter((other) => other.id !== test.id)}
        error={error ?? fieldError(update.error, 'value')}
      />
      <Field label="Tested at" type="datetime-local" value={at} onChange={setAt} error={atError ?? fieldError(update.error, 'at')} />
      <Field label="Note" value={note} onChange={setNote} maxLength={2000} />
      {update.isError && !isSaidAtFields(update.error) ? <Notice error={update.error} /> : null}
      <div style={{ display: 'flex', flexWrap: 'wrap', gap: 8 }}>
        <Button kind="primary" submit busy={update.isPending}>
          Save
        </Button>
        <Button onPress={onDelete}>Delete</Button>
      </div>
    </Form>
  );
}
