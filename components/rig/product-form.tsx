import { useState } from 'react';
import { uuidv7 } from 'uuidv7';
import { type Component, substances } from '#shared/contract/products.ts';
import { useCreateProduct } from '../../hooks/use-sites.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { Checkbox } from '../ui/checkbox.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';
import { Select } from '../ui/select.tsx';

type Substance = (typeof substances)[number];
const substanceNames: Record<Substance, string> = {
  ethanol: 'Ethanol',
  methanol: 'Methanol',
  'acetic-acid': 'Acetic acid',
  glucose: 'Glucose',
  sucrose: 'Sucrose',
  water: 'Water',
  other: 'Something else',
};
const forms = [
  { value: 'liquid', label: 'Liquid' },
  { value: 'pellets', label: 'Pellets' },
] as const;
const measures = [
  { value: 'percent', label: '% by volume' },
  { value: 'grams', label: 'g per litre' },
] as const;

/** A product as its bottle describes it: main substance and label dose. */
export function ProductForm({ siteId, onDone }: { siteId: string; onDone: () => void }) {
  const create = useCreateProduct(siteId);
  const [id] = useState(() => uuidv7());
  const [name, setName] = useState('');
  const [form, setForm] = useState<'liquid' | 'pellets'>('liquid');
  const [substance, setSubstance] = useState<Substance>('ethanol');
  const [measure, setMeasure] = useState<'percent' | 'grams'>('percent');
  const [strength, setStrength] = useState('');
  const [hasLabel, setHasLabel] = useState(true);
  const [ml, setMl] = useState('');
  const [maxMl, setMaxMl] = useState('');
  const [perLitres, setPerLitres] = useState('100');
  const [perDays, setPerDays] = useState('1');
  const [isMissing, setMissing] = useState(false);
  const numbers = {
    strength: parseDecimal(strength),
    ml: parseDecimal(ml),
    maxMl: parseDecimal(maxMl),
    perLitres: parseDecimal(perLitres),
    perDays: parseDecimal(perDays),
  };
  const missing = (parsed: { ok: boolean }) => (isMissing && !parsed.ok ? 'Give a number' : null);

  function save(): void {
    setMissing(true);
    const composition: Component[] = [];
    if (numbers.strength.ok) {
      const value = numbers.strength.value;
      composition.push(measure === 'percent' ? { substance, percentByVolume: value } : { substance, gramsPerLitre: value });
    } else if (strength.trim() !== '') return;
    if (!hasLabel) {
      create.mutate({ id, name, form, composition, label: null }, { onSuccess: onDone });
      return;
    }
    if (!numbers.ml.ok || !numbers.perLitres.ok || !numbers.perDays.ok || (maxMl.trim() !== '' && !numbers.maxMl.ok)) return;
    const label = {
      ml: numbers.ml.value,
      maxMl: numbers.maxMl.ok ? numbers.maxMl.value : null,
      perLitres: numbers.perLitres.value,
      perDays: numbers.perDays.value,
    };
    create.mutate({ id, name, form, composition, label }, { onSuccess: onDone });
  }

  return (
    <Form name="Product" onSubmit={save}>
      <Field label="Name" value={name} onChange={setName} maxLength={80} required error={fieldError(create.error, 'name')} />
      <RadioGroup legend="Form" value={form} onChange={setForm} options={forms} />
      <Select
        label="Main substance"
        value={substance}
        onChange={setSubstance}
        options={substances.map((value) => ({ value, label: substanceNames[value] }))}
      />
      <RadioGroup legend="Strength given as" value={measure} onChange={setMeasure} options={measures} />
      <DecimalField
        label="Strength"
        unit={measure === 'percent' ? '%' : 'g/L'}
        text={strength}
        onChange={setStrength}
        hint="Leave empty when the bottle does not say; then its oxygen demand is unknown."
        error={fieldError(create.error, 'composition') ?? fieldError(create.error, 'composition.0.percentByVolume')}
      />
      <Checkbox label="It has a label dose" checked={hasLabel} onChange={setHasLabel} />
      {hasLabel ? (
        <>
          <DecimalField
            label="Label dose"
            unit="mL"
            text={ml}
            onChange={setMl}
            error={fieldError(create.error, 'label.ml') ?? missing(numbers.ml)}
          />
          <DecimalField
            label="Up to"
            unit="mL"
            text={maxMl}
            onChange={setMaxMl}
            hint="Only when the label names a range."
            error={fieldError(create.error, 'label.maxMl')}
          />
          <DecimalField
            label="For this much water"
            unit="L"
            text={perLitres}
            onChange={setPerLitres}
            error={fieldError(create.error, 'label.perLitres') ?? missing(numbers.perLitres)}
          />
          <DecimalField
            label="Every"
            unit="days"
            text={perDays}
            onChange={setPerDays}
            error={fieldError(create.error, 'label.perDays') ?? missing(numbers.perDays)}
          />
        </>
      ) : null}
      {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
      <Button kind="primary" submit busy={create.isPending}>
        Add
      </Button>
    </Form>
  );
}
