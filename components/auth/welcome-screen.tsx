import { Redirect } from 'expo-router';
import { useState } from 'react';
import { useWelcome, useWelcomeState } from '../../hooks/use-auth.ts';
import { useSession } from '../../hooks/use-session.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { browserTimeZone } from '../../lib/format/time-zones.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { TimeZoneSelect } from '../ui/time-zone-select.tsx';
import { AuthPage } from './auth-page.tsx';

/** The first start: the account that owns the first site. */
export function WelcomeScreen() {
  useTitle('Welcome');
  const session = useSession();
  const state = useWelcomeState();
  const welcome = useWelcome();
  const [code, setCode] = useState('');
  const [name, setName] = useState('');
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const [siteName, setSiteName] = useState('');
  const [timeZone, setTimeZone] = useState(browserTimeZone);

  if (session.status === 'signed-in') return <Redirect href="/" />;
  if (state.data?.open === false) {
    return (
      <AuthPage title="Welcome" sentence="The first account is made already. Sign in, or ask its owner to invite you.">
        <LinkText href="/sign-in" block>
          Sign in
        </LinkText>
      </AuthPage>
    );
  }
  return (
    <AuthPage title="Welcome" sentence="Make the first account. It owns the first site: your home, a workshop, a client.">
      <Form name="Make the first account" onSubmit={() => welcome.mutate({ code, name, email, password, siteName, timeZone })}>
        {welcome.isError && !isSaidAtFields(welcome.error) ? <Notice error={welcome.error} /> : null}
        <Field
          label="One-time code"
          hint="The server printed it when it started"
          autoComplete="one-time-code"
          required
          value={code}
          onChange={setCode}
          error={fieldError(welcome.error, 'code')}
        />
        <Field label="Your name" autoComplete="name" required value={name} onChange={setName} error={fieldError(welcome.error, 'name')} />
        <Field
          label="E-mail"
          type="email"
          autoComplete="username"
          required
          value={email}
          onChange={setEmail}
          error={fieldError(welcome.error, 'email')}
        />
        <Field
          label="Password"
          type="password"
          hint="At least 12 characters; a few plain words are fine"
          autoComplete="new-password"
          required
          value={password}
          onChange={setPassword}
          error={fieldError(welcome.error, 'password')}
        />
        <Field label="Name of the site" required value={siteName} onChange={setSiteName} error={fieldError(welcome.error, 'siteName')} />
        <TimeZoneSelect value={timeZone} onChange={setTimeZone} error={fieldError(welcome.error, 'timeZone')} />
        <Button kind="primary" submit wide busy={welcome.isPending}>
          Make the account
        </Button>
      </Form>
    </AuthPage>
  );
}
