import { useState } from 'react';
import { uuidv7 } from 'uuidv7';
import type { Head } from '#shared/contract/rig.ts';
import type { System } from '#shared/contract/systems.ts';
import { useCreateHead, useDevices, useReservoirs, useUpdateHead } from '../../hooks/use-rig.ts';
import { useProducts } from '../../hooks/use-sites.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';
import { Select } from '../ui/select.tsx';
import { Text } from '../ui/text.tsx';

const kinds = [
  { value: 'carbon', label: 'Carbon source', hint: 'counts in every limit, and Stop stops it' },
  { value: 'other', label: 'Something else' },
] as const;
const none = 'none';

/** What a head is used for, from now on. Earlier runs keep what was in force when they began. */
export function HeadForm({ system, head, onDone }: { system: System; head: Head | null; onDone: () => void }) {
  const create = useCreateHead(system.id);
  const update = useUpdateHead(system.id);
  const saving = head === null ? create : update;
  const pumps = (useDevices(system.id).data ?? []).filter((device) => device.kind === 'pump');
  const reservoirs = useReservoirs(system.id).data ?? [];
  const products = (useProducts(system.siteId).data ?? []).filter((product) => product.form === 'liquid');
  const [id] = useState(() => uuidv7());
  const [deviceId, setDeviceId] = useState(head?.deviceId ?? pumps[0]?.id ?? '');
  const [number, setNumber] = useState(String(head?.head ?? 1));
  const [kind, setKind] = useState<Head['kind']>(head?.kind ?? 'carbon');
  const [productId, setProductId] = useState(head?.productId ?? none);
  const [reservoirId, setReservoirId] = useState(head?.reservoirId ?? none);
  const [rate, setRate] = useState(head === null ? '' : String(head.mlPerSecond));
  const [smallest, setSmallest] = useState(head === null ? '' : String(head.smallestMl));
  const [isMissing, setMissing] = useState(false);
  const mlPerSecond = parseDecimal(rate);
  const smallestMl = parseDecimal(smallest);
  const missing = (parsed: { ok: boolean }) => (isMissing && !parsed.ok ? 'Give a number' : null);

  function save(): void {
    setMissing(true);
    if (!mlPerSecond.ok || !smallestMl.ok || (head === null && deviceId === '')) return;
    const body = {
      kind,
      productId: productId === none ? null : productId,
      reservoirId: reservoirId === none ? null : reservoirId,
      mlPerSecond: mlPerSecond.value,
      smallestMl: smallestMl.value,
    };
    if (head === null) create.mutate({ id, deviceId, head: Number(number), ...body }, { onSuccess: onDone });
    else update.mutate({ headId: head.id, body }, { onSuccess: onDone });
  }

  return (
    <Form name="Head" onSubmit={save}>
      {head === null && pumps.length === 0 ? <Text>Connect a dosing pump first: its heads are put to use here.</Text> : null}
      {head === null ? (
        <>
          <Select
            label="Pump"
            value={deviceId}
            onChange={setDeviceId}
            placeholder="Choose a pump"
            options={pumps.map((pump) => ({ value: pump.id, label: pump.name }))}
            error={isMissing && deviceId === '' ? 'Choose a pump' : fieldError(create.error, 'deviceId')}
          />
          <Select
            label="Head"
            value={number}
            onChange={setNumber}
            options={Array.from({ length: 16 }, (_, index) => ({ value: String(index + 1), label: String(index + 1) }))}
            error={fieldError(create.error, 'head')}
          />
        </>
      ) : null}
      <RadioGroup legend="What does it give?" value={kind} onChange={setKind} options={kinds} />
      <Select
        label="Product"
        value={productId}
        onChange={setProductId}
        options={[{ value: none, label: 'Not said' }, ...products.map((product) => ({ value: product.id, label: product.name }))]}
        error={fieldError(saving.error, 'productId')}
      />
      <Select
        label="Bottle"
        value={reservoirId}
        onChange={setReservoirId}
        options={[{ value: none, label: 'Not said' }, ...reservoirs.map((reservoir) => ({ value: reservoir.id, label: reservoir.name }))]}
        error={fieldError(saving.error, 'reservoirId')}
      />
      <DecimalField
        label="Delivery rate"
        unit="mL/s"
        text={rate}
        onChange={setRate}
        hint="Measured: run it into a cylinder for a known time."
        error={fieldError(saving.error, 'mlPerSecond') ?? missing(mlPerSecond)}
      />
      <DecimalField
        label="Smallest accurate portion"
        unit="mL"
        text={smallest}
        onChange={setSmallest}
        hint="From the pump's papers; often 0.2 to 1."
        error={fieldError(saving.error, 'smallestMl') ?? missing(smallestMl)}
      />
      {saving.isError && !isSaidAtFields(saving.error) ? <Notice error={saving.error} /> : null}
      <div className="row-of-buttons">
        <Button kind="primary" submit busy={saving.isPending}>
          Save
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </Form>
  );
}
