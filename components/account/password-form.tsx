import { useState } from 'react';
import { useChangePassword } from '../../hooks/use-me.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Notice } from '../ui/notice.tsx';
import { Section } from '../ui/section.tsx';

export function PasswordForm() {
  const change = useChangePassword();
  const [current, setCurrent] = useState('');
  const [next, setNext] = useState('');
  function save(): void {
    change.mutate(
      { current, next },
      {
        onSuccess: () => {
          setCurrent('');
          setNext('');
        },
      },
    );
  }
  return (
    <Section title="Password">
      <Form onSubmit={save}>
        {change.isError && !isSaidAtFields(change.error) ? <Notice error={change.error} /> : null}
        <Field
          label="Password now"
          type="password"
          autoComplete="current-password"
          value={current}
          onChange={setCurrent}
          error={fieldError(change.error, 'current')}
        />
        <Field
          label="New password"
          type="password"
          hint="At least 12 characters; a few plain words are fine. Every other session ends"
          autoComplete="new-password"
          value={next}
          onChange={setNext}
          error={fieldError(change.error, 'next')}
        />
        <div>
          <Button submit busy={change.isPending} disabled={current === '' || next === ''}>
            Change password
          </Button>
        </div>
        <LiveRegion>{change.isSuccess ? 'Password changed; every other session has ended.' : null}</LiveRegion>
      </Form>
    </Section>
  );
}
