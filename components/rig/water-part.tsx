import { useState } from 'react';
import type { System } from '#shared/contract/systems.ts';
import { useUpdateSystem } from '../../hooks/use-systems.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { RigPart, type RigPartProps } from './rig-part.tsx';

/** Name and water of the system. Every dose, ceiling and limit follows from the net volume. */
export function WaterPart({ system, mayChange }: RigPartProps) {
  const [isOpen, setOpen] = useState(false);
  return (
    <RigPart title="Water" action={mayChange ? <Button onPress={() => setOpen(true)}>Change the volumes</Button> : null}>
      <dl className="facts">
        <dt>Display</dt>
        <dd>{`${system.displayLitres} L`}</dd>
        <dt>Sump</dt>
        <dd>{`${system.sumpLitres} L`}</dd>
        <dt>Displaced by rock and sand</dt>
        <dd>{system.displacementLitres === 0 ? '0 L: is there really none?' : `${system.displacementLitres} L`}</dd>
        <dt>Net</dt>
        <dd>
          <Text bold>{`${Math.round(system.netLitres * 10) / 10} L`}</Text>
        </dd>
      </dl>
      <Sheet title="Water" open={isOpen} onClose={() => setOpen(false)}>
        <WaterForm system={system} onDone={() => setOpen(false)} />
      </Sheet>
    </RigPart>
  );
}

function WaterForm({ system, onDone }: { system: System; onDone: () => void }) {
  const update = useUpdateSystem(system.id);
  const [name, setName] = useState(system.name);
  const [display, setDisplay] = useState(String(system.displayLitres));
  const [sump, setSump] = useState(String(system.sumpLitres));
  const [displacement, setDisplacement] = useState(String(system.displacementLitres));
  const [isMissing, setMissing] = useState(false);
  const litres = { display: parseDecimal(display), sump: parseDecimal(sump), displacement: parseDecimal(displacement) };
  const missing = (parsed: { ok: boolean }) => (isMissing && !parsed.ok ? 'Give litres' : null);
  function save(): void {
    setMissing(true);
    if (!litres.display.ok || !litres.sump.ok || !litres.displacement.ok) return;
    const body = {
      name,
      displayLitres: litres.display.value,
      sumpLitres: litres.sump.value,
      displacementLitres: litres.displacement.value,
    };
    update.mutate(body, { onSuccess: onDone });
  }
  return (
    <Form name="Water" onSubmit={save}>
      <Field label="Name" value={name} onChange={setName} maxLength={80} error={fieldError(update.error, 'name')} />
      <DecimalField
        label="Display"
        unit="L"
        text={display}
        onChange={setDisplay}
        error={fieldError(update.error, 'displayLitres') ?? missing(litres.display)}
      />
      <DecimalField
        label="Sump, at running level"
        unit="L"
        text={sump}
        onChange={setSump}
        error={fieldError(update.error, 'sumpLitres') ?? missing(litres.sump)}
      />
      <DecimalField
        label="Displaced by rock and sand"
        unit="L"
        text={displacement}
        onChange={setDisplacement}
        error={fieldError(update.error, 'displacementLitres') ?? missing(litres.displacement)}
      />
      {update.isError && !isSaidAtFields(update.error) ? <Notice error={update.error} /> : null}
      <Button kind="primary" submit busy={update.isPending}>
        Save
      </Button>
    </Form>
  );
}
