import { useState } from 'react';
import type { Test, TestQuantity } from '#shared/contract/records.ts';
import { unitsFor } from '#shared/units/nutrient-units.ts';
import { Button } from '../ui/button.tsx';
import { Checkbox } from '../ui/checkbox.tsx';
import { Select } from '../ui/select.tsx';
import { Stepper } from '../ui/stepper.tsx';
import { Text } from '../ui/text.tsx';
import { lastValue, type ResultDraft, stepFor } from './test-form.ts';
import { ionWords, quantityNames, resultWords } from './result-words.ts';

/** One result: value with its stepper; unit and "below detection" one press away. */
export function ResultInput({
  quantity,
  draft,
  onChange,
  tests,
  error,
}: {
  quantity: TestQuantity;
  draft: ResultDraft;
  onChange: (draft: ResultDraft) => void;
  tests: readonly Test[];
  error: string | null;
}) {
  const [more, setMore] = useState(draft.below);
  const { step, decimals } = stepFor(draft.unit);
  const last = tests.find((test) => test.quantity === quantity);
  const name = quantityNames[quantity];
  const asIon = ionWords(quantity, draft);
  return (
    <div className="field-group">
      <Stepper
        label={name}
        unit={draft.unit}
        text={draft.text}
        onChange={(text) => onChange({ ...draft, text })}
        step={step}
        decimals={decimals}
        startAt={lastValue(quantity, draft.unit, tests) ?? 0}
        hint={last === undefined ? undefined : `Last: ${resultWords(last)}`}
        error={error}
      />
      {asIon === null ? null : <Text figures>{asIon}</Text>}
      {more ? (
        <>
          <Select
            label={`${name}: unit`}
            value={draft.unit}
            onChange={(unit) => onChange({ ...draft, unit })}
            options={unitsFor(quantity).map((unit) => ({ value: unit, label: unit }))}
          />
          <Checkbox
            label={`${name}: below detection`}
            hint="The kit showed nothing: the result is under the value above."
            checked={draft.below}
            onChange={(below) => onChange({ ...draft, below })}
          />
        </>
      ) : (
        <Button kind="quiet" name={`Unit or below detection of ${name.toLowerCase()}`} onPress={() => setMore(true)}>
          Unit or below detection
        </Button>
      )}
    </div>
  );
}
