import { useState } from 'react';
import type { Reservoir } from '#shared/contract/rig.ts';
import type { System } from '#shared/contract/systems.ts';
import { useCreateRefill } from '../../hooks/use-records.ts';
import { useProducts } from '../../hooks/use-sites.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';

/** A refill: what the bottle holds now, and of which product. */
export function RefillForm({ system, reservoir, onDone }: { system: System; reservoir: Reservoir; onDone: () => void }) {
  const create = useCreateRefill(system.id);
  const products = useProducts(system.siteId).data ?? [];
  const [productId, setProductId] = useState(reservoir.lastRefill?.productId ?? '');
  const [volume, setVolume] = useState(String(reservoir.capacityMl));
  const [lot, setLot] = useState('');
  const [isMissing, setMissing] = useState(false);
  const ml = parseDecimal(volume);

  function save(): void {
    setMissing(true);
    if (!ml.ok || productId === '') return;
    const body = { productId, at: new Date().toISOString(), ml: ml.value, lot };
    create.mutate({ reservoirId: reservoir.id, body }, { onSuccess: onDone });
  }

  return (
    <Form name="Refill" onSubmit={save}>
      <Select
        label="Product"
        value={productId}
        onChange={setProductId}
        placeholder="Choose a product"
        options={products.map((product) => ({ value: product.id, label: product.name }))}
        error={isMissing && productId === '' ? 'Choose a product' : fieldError(create.error, 'productId')}
      />
      <DecimalField
        label="Holds now"
        unit="mL"
        text={volume}
        onChange={setVolume}
        error={fieldError(create.error, 'ml') ?? (isMissing && !ml.ok ? 'Give mL' : null)}
      />
      <Field label="Lot" value={lot} onChange={setLot} maxLength={80} hint="From the label, if you want to find it again." />
      {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
      <Button kind="primary" submit busy={create.isPending}>
        Write down the refill
      </Button>
    </Form>
  );
}
