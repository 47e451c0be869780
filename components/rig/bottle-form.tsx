import { useState } from 'react';
import { uuidv7 } from 'uuidv7';
import { useCreateReservoir } from '../../hooks/use-rig.ts';
import { useSeries } from '../../hooks/use-telemetry.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { seriesName } from '../../lib/format/series-value.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';

const none = 'none';

/** A new bottle: its name, what it holds, and the level sensor in it if there is one. */
export function BottleForm({ systemId, onDone }: { systemId: string; onDone: () => void }) {
  const create = useCreateReservoir(systemId);
  const levels = (useSeries(systemId).data ?? []).filter((series) => series.quantity === 'level');
  const [id] = useState(() => uuidv7());
  const [name, setName] = useState('');
  const [capacity, setCapacity] = useState('');
  const [levelSeriesId, setLevelSeriesId] = useState(none);
  const [isMissing, setMissing] = useState(false);
  const capacityMl = parseDecimal(capacity);

  function save(): void {
    setMissing(true);
    if (!capacityMl.ok) return;
    create.mutate(
      { id, name, capacityMl: capacityMl.value, levelSeriesId: levelSeriesId === none ? null : levelSeriesId },
      { onSuccess: onDone },
    );
  }

  return (
    <Form name="Bottle" onSubmit={save}>
      <Field label="Name" value={name} onChange={setName} maxLength={80} required error={fieldError(create.error, 'name')} />
      <DecimalField
        label="Holds"
        unit="mL"
        text={capacity}
        onChange={setCapacity}
        error={fieldError(create.error, 'capacityMl') ?? (isMissing && !capacityMl.ok ? 'Give mL' : null)}
      />
      <Select
        label="Level sensor"
        value={levelSeriesId}
        onChange={setLevelSeriesId}
        options={[
          { value: none, label: 'None' },
          ...levels.map((series) => ({ value: series.id, label: `${seriesName(series)} (${series.channel})` })),
        ]}
        error={fieldError(create.error, 'levelSeriesId')}
      />
      {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
      <Button kind="primary" submit busy={create.isPending}>
        Add
      </Button>
    </Form>
  );
}
