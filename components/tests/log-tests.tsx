import { useState } from 'react';
import type { Test } from '#shared/contract/records.ts';
import { useCreateTest } from '../../hooks/use-records.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import type { Nutrient } from '../../lib/format/nutrient.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Notice } from '../ui/notice.tsx';
import { Text } from '../ui/text.tsx';
import { ResultInput } from './result-input.tsx';
import { consequenceSentence, quantityNames } from './result-words.ts';
import { localTime, readLocalTime, readResult, type ResultDraft, usualUnit } from './test-form.ts';

const nutrients: readonly Nutrient[] = ['nitrate', 'phosphate'];

type Drafts = Record<Nutrient, ResultDraft>;
type Errors = Partial<Record<Nutrient | 'at', string>>;

type Saved = Pick<Test, 'canonicalMgPerL' | 'below'> & { quantity: Nutrient; waits: boolean };

/**
 * Both nutrients in one sheet. Both are read before either is sent, and what was saved leaves the form, so that pressing again
 * never writes it twice.
 */
export function LogTests({
  systemId,
  timeZone,
  tests,
  onDone,
}: {
  systemId: string;
  timeZone: string;
  tests: readonly Test[];
  onDone: (sentence: string) => void;
}) {
  const create = useCreateTest(systemId);
  const [drafts, setDrafts] = useState<Drafts>(() => ({
    nitrate: { text: '', unit: usualUnit('nitrate', tests), below: false },
    phosphate: { text: '', unit: usualUnit('phosphate', tests), below: false },
  }));
  const [at, setAt] = useState<string | null>(null);
  const [note, setNote] = useState('');
  const [errors, setErrors] = useState<Errors>({});
  const [failed, setFailed] = useState<unknown>(null);
  const [saved, setSaved] = useState<readonly Saved[]>([]);
  const open = nutrients.filter((nutrient) => saved.every((one) => one.quantity !== nutrient));

  async function save(): Promise<void> {
    const given = open.filter((nutrient) => drafts[nutrient].text.trim() !== '');
    const found: Errors = {};
    const [first] = open;
    if (given.length === 0 && first !== undefined) found[first] = open.length === 2 ? 'Give at least one of the two' : 'Give the result';
    const atText = at === null ? new Date().toISOString() : readLocalTime(at, timeZone);
    if (atText === null) found.at = 'Give the day and time of the test';
    const reads = given.map((nutrient) => ({ nutrient, read: readResult(nutrient, drafts[nutrient]) }));
    for (const { nutrient, read } of reads) if (!read.ok) found[nutrient] = read.error;
    setErrors(found);
    setFailed(null);
    if (Object.keys(found).length > 0 || atText === null) return;

    let written = saved;
    for (const { nutrient, read } of reads) {
      if (!read.ok) continue;
      const { unit, below } = drafts[nutrient];
      try {
        const result = await create.mutateAsync({ at: atText, quantity: nutrient, value: read.value, unit, below, note });
        written = [...written, { quantity: nutrient, canonicalMgPerL: read.canonicalMgPerL, below, waits: result.state === 'waiting' }];
        setSaved(written);
      } catch (error) {
        setErrors({ [nutrient]: fieldError(error, 'value') ?? undefined, at: fieldError(error, 'at') ?? undefined });
        setFailed(isSaidAtFields(error) && (fieldError(error, 'value') ?? fieldError(error, 'at')) !== null ? null : error);
        return;
      }
    }
    const waits = written.some((one) => one.waits);
    onDone(`${consequenceSentence(written)}${waits ? ' Kept here until the network is back.' : ''}`);
  }

  return (
    <Form name="Write down a test" onSubmit={() => void save()}>
      <LiveRegion>
        {saved.map((one) => (
          <Text key={one.quantity} bold>
            {`${quantityNames[one.quantity]} is saved.`}
          </Text>
        ))}
      </LiveRegion>
      {open.map((nutrient) => (
        <ResultInput
          key={nutrient}
          quantity={nutrient}
          draft={drafts[nutrient]}
          onChange={(draft) => setDrafts((now) => ({ ...now, [nutrient]: draft }))}
          tests={tests}
          error={errors[nutrient] ?? null}
        />
      ))}
      {at === null ? (
        <Button kind="quiet" onPress={() => setAt(localTime(Date.now(), timeZone))}>
          Tested now; change the time
        </Button>
      ) : (
        <Field label="Tested at" type="datetime-local" value={at} onChange={setAt} error={errors.at ?? null} />
      )}
      <Field label="Note" value={note} onChange={setNote} maxLength={2000} hint="Only if there is something to say." />
      {failed === null ? null : <Notice error={failed} />}
      <Button kind="primary" submit wide busy={create.isPending}>
        Save
      </Button>
    </Form>
  );
}
