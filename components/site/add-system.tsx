import { useRouter } from 'expo-router';
import { useState } from 'react';
import { uuidv7 } from 'uuidv7';
import { useCreateSystem } from '../../hooks/use-systems.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { parseDecimal } from '../../lib/parse-decimal.ts';
import { Button } from '../ui/button.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';

/** A new system needs a name and its water. */
export function AddSystem({ siteId }: { siteId: string }) {
  const [open, setOpen] = useState(false);
  return (
    <>
      <Button onPress={() => setOpen(true)}>Add a system</Button>
      <Sheet title="Add a system" open={open} onClose={() => setOpen(false)}>
        <SystemForm siteId={siteId} />
      </Sheet>
    </>
  );
}

function SystemForm({ siteId }: { siteId: string }) {
  const create = useCreateSystem(siteId);
  const router = useRouter();
  const [id] = useState(() => uuidv7());
  const [name, setName] = useState('');
  const [display, setDisplay] = useState('');
  const [sump, setSump] = useState('0');
  const [displacement, setDisplacement] = useState('');
  const [missing, setMissing] = useState(false);

  const displayLitres = parseDecimal(display);
  const sumpLitres = parseDecimal(sump);
  const displacementLitres = parseDecimal(displacement);

  function save(): void {
    if (!displayLitres.ok || !sumpLitres.ok || !displacementLitres.ok) {
      setMissing(true);
      return;
    }
    create.mutate(
      { id, name, displayLitres: displayLitres.value, sumpLitres: sumpLitres.value, displacementLitres: displacementLitres.value },
      { onSuccess: (system) => router.push(`/systems/${system.id}`) },
    );
  }
  const gap = (parsed: { ok: boolean }) => (missing && !parsed.ok ? 'Give litres' : null);
  return (
    <Form onSubmit={save}>
      {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
      <Field label="Name" value={name} onChange={setName} error={fieldError(create.error, 'name')} />
      <DecimalField
        label="Water in the display"
        unit="L"
        text={display}
        onChange={setDisplay}
        error={fieldError(create.error, 'displayLitres') ?? gap(displayLitres)}
      />
      <DecimalField
        label="Water in the sump, at running level"
        unit="L"
        text={sump}
        onChange={setSump}
        error={fieldError(create.error, 'sumpLitres') ?? gap(sumpLitres)}
      />
      <DecimalField
        label="What rock and sand displace"
        hint="Often a tenth of the display; 0 for a bare one"
        unit="L"
        text={displacement}
        onChange={setDisplacement}
        error={fieldError(create.error, 'displacementLitres') ?? gap(displacementLitres)}
      />
      <Button kind="primary" submit busy={create.isPending}>
        Add
      </Button>
    </Form>
  );
}
