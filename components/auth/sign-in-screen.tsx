import { Redirect, useLocalSearchParams } from 'expo-router';
import { useRef, useState } from 'react';
import { useSignIn, useWelcomeState } from '../../hooks/use-auth.ts';
import { useSession } from '../../hooks/use-session.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Text } from '../ui/text.tsx';
import { AuthPage } from './auth-page.tsx';
import { placeAfterSignIn } from './place-after-sign-in.ts';

export function SignInScreen() {
  useTitle('Sign in');
  const session = useSession();
  const { to } = useLocalSearchParams<{ to?: string }>();
  const welcome = useWelcomeState();
  const signIn = useSignIn();
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const emailField = useRef<HTMLInputElement>(null);

  if (session.status === 'signed-in') return <Redirect href={placeAfterSignIn(to)} />;
  if (welcome.data?.open === true) return <Redirect href="/welcome" />;
  return (
    <AuthPage title="Sign in">
      <Form name="Sign in" onSubmit={() => signIn.mutate({ email, password }, { onError: () => emailField.current?.focus() })}>
        {signIn.isError && !isSaidAtFields(signIn.error) ? <Notice error={signIn.error} /> : null}
        <Field
          ref={emailField}
          label="E-mail"
          type="email"
          autoComplete="username"
          required
          value={email}
          onChange={setEmail}
          error={fieldError(signIn.error, 'email')}
        />
        <Field
          label="Password"
          type="password"
          autoComplete="current-password"
          required
          value={password}
          onChange={setPassword}
          error={fieldError(signIn.error, 'password')}
        />
        <Button kind="primary" submit wide busy={signIn.isPending}>
          Sign in
        </Button>
      </Form>
      {welcome.data?.demo === true ? (
        <Text variant="note" soft>
          This is the demo: its sign-ins were printed where the server was started.
        </Text>
      ) : null}
      {welcome.data?.open === false ? null : (
        <LinkText href="/welcome" block>
          First start? Make the first account
        </LinkText>
      )}
    </AuthPage>
  );
}
