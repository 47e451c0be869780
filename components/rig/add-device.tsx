import { useState } from 'react';
import { uuidv7 } from 'uuidv7';
import { useCreateDevice } from '../../hooks/use-rig.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';
import { CredentialsShown } from './credentials-shown.tsx';

const kinds = [
  { value: 'pump', label: 'Dosing pump', hint: 'one or more heads' },
  { value: 'probe', label: 'Probe or controller of probes' },
  { value: 'other', label: 'Something else that measures' },
] as const;

/** Registers a device and shows its password once. The id is made here, so that a repeated press makes one device. */
export function AddDevice({ systemId, onDone }: { systemId: string; onDone: () => void }) {
  const create = useCreateDevice(systemId);
  const [id] = useState(() => uuidv7());
  const [name, setName] = useState('');
  const [kind, setKind] = useState<(typeof kinds)[number]['value']>('pump');
  if (create.data !== undefined) return <CredentialsShown credentials={create.data.credentials} onDone={onDone} />;
  return (
    <Form name="Connect a device" onSubmit={() => create.mutate({ id, name, kind })}>
      <Field label="Name" value={name} onChange={setName} maxLength={80} required error={fieldError(create.error, 'name')} />
      <RadioGroup legend="What is it?" value={kind} onChange={setKind} options={kinds} />
      {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
      <Button kind="primary" submit busy={create.isPending}>
        Register
      </Button>
    </Form>
  );
}
