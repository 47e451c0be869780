import { Redirect, useLocalSearchParams } from 'expo-router';
import { useState } from 'react';
import { useAcceptInvite } from '../../hooks/use-auth.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { AuthPage } from './auth-page.tsx';

/** The page behind the one-time link of an invitation. */
export function JoinScreen() {
  useTitle('Join');
  const { token } = useLocalSearchParams<{ token?: string }>();
  const accept = useAcceptInvite();
  const [name, setName] = useState('');
  const [password, setPassword] = useState('');

  if (accept.isSuccess) return <Redirect href="/" />;
  if (token === undefined || token === '') {
    return (
      <AuthPage title="Join">
        <Notice sentence="This address has no invitation in it. Open the whole link from the mail." />
      </AuthPage>
    );
  }
  return (
    <AuthPage title="Join" sentence="You were invited to a site. With an account already, give its password; else choose one.">
      <Form name="Join" onSubmit={() => accept.mutate({ token, name, password })}>
        {accept.isError && !isSaidAtFields(accept.error) ? <Notice error={accept.error} /> : null}
        <Field label="Your name" autoComplete="name" required value={name} onChange={setName} error={fieldError(accept.error, 'name')} />
        <Field
          label="Password"
          type="password"
          hint="At least 12 characters; a few plain words are fine"
          autoComplete="new-password"
          required
          value={password}
          onChange={setPassword}
          error={fieldError(accept.error, 'password')}
        />
        <Button kind="primary" submit wide busy={accept.isPending}>
          Join
        </Button>
      </Form>
    </AuthPage>
  );
}
