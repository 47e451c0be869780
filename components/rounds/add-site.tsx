import { useRouter } from 'expo-router';
import { useState } from 'react';
import { uuidv7 } from 'uuidv7';
import { useCreateSite } from '../../hooks/use-sites.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { browserTimeZone } from '../../lib/format/time-zones.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { TimeZoneSelect } from '../ui/time-zone-select.tsx';

/** A new site: a home, a workshop, a client. Who makes it owns it. */
export function AddSite() {
  const [open, setOpen] = useState(false);
  return (
    <>
      <Button onPress={() => setOpen(true)}>Add a site</Button>
      <Sheet title="Add a site" open={open} onClose={() => setOpen(false)}>
        <SiteForm />
      </Sheet>
    </>
  );
}

function SiteForm() {
  const create = useCreateSite();
  const router = useRouter();
  const [id] = useState(() => uuidv7());
  const [name, setName] = useState('');
  const [timeZone, setTimeZone] = useState(browserTimeZone);
  return (
    <Form
      name="Add a site"
      onSubmit={() => create.mutate({ id, name, timeZone }, { onSuccess: (site) => router.push(`/sites/${site.id}`) })}
    >
      <Text>A home, a workshop, a client. You own it, and can invite others to it.</Text>
      <Field label="Name" value={name} onChange={setName} maxLength={80} required error={fieldError(create.error, 'name')} />
      <TimeZoneSelect value={timeZone} onChange={setTimeZone} error={fieldError(create.error, 'timeZone')} />
      {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
      <Button kind="primary" submit wide busy={create.isPending}>
        Add
      </Button>
    </Form>
  );
}
