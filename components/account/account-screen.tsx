import { useMe } from '../../hooks/use-me.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { roleSentences } from '../../lib/codes/role-words.ts';
import { Page } from '../shell/page.tsx';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { NameForm } from './name-form.tsx';
import { PasswordForm } from './password-form.tsx';
import { SessionList } from './session-list.tsx';
import { SignOutButton } from './sign-out-button.tsx';
import { ThemePicker } from './theme-picker.tsx';
import { WaitingEntries } from './waiting-entries.tsx';

/** Oneself: name, password, sessions, theme, and what waits to be sent. */
export function AccountScreen() {
  useTitle('Account');
  const me = useMe();
  return (
    <Page>
      <Heading level={1}>Account</Heading>
      {me.isError ? <Notice error={me.error} onRetry={() => void me.refetch()} /> : null}
      {me.data === undefined ? (
        me.isError ? null : (
          <Skeleton lines={6} name="Loading your account" />
        )
      ) : (
        <>
          <div>
            <Text bold>{me.data.email}</Text>
            {me.data.memberships.map((membership) => (
              <Text key={membership.siteId} soft>
                {`${membership.siteName}: ${membership.role}. ${roleSentences[membership.role]}.`}
              </Text>
            ))}
          </div>
          <SignOutButton />
          <WaitingEntries />
          <ThemePicker />
          <NameForm key={me.data.name} name={me.data.name} />
          <PasswordForm />
          <SessionList />
        </>
      )}
    </Page>
  );
}
