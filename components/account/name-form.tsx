import { useState } from 'react';
import { useUpdateMe } from '../../hooks/use-me.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Notice } from '../ui/notice.tsx';
import { Section } from '../ui/section.tsx';

export function NameForm({ name }: { name: string }) {
  const update = useUpdateMe();
  const [typed, setTyped] = useState(name);
  return (
    <Section title="Name">
      <Form onSubmit={() => update.mutate({ name: typed })}>
        {update.isError && !isSaidAtFields(update.error) ? <Notice error={update.error} /> : null}
        <Field
          label="Your name"
          hint="Others see it beside what you do"
          autoComplete="name"
          value={typed}
          onChange={setTyped}
          error={fieldError(update.error, 'name')}
        />
        <div>
          <Button submit busy={update.isPending} disabled={typed.trim() === '' || typed === name}>
            Save name
          </Button>
        </div>
        <LiveRegion>{update.isSuccess ? 'Name saved.' : null}</LiveRegion>
      </Form>
    </Section>
  );
}
