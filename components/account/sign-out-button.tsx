import { useSignOut } from '../../hooks/use-auth.ts';
import { Button } from '../ui/button.tsx';
import { Notice } from '../ui/notice.tsx';

export function SignOutButton() {
  const signOut = useSignOut();
  return (
    <div>
      <Button busy={signOut.isPending} onPress={() => signOut.mutate()}>
        Sign out
      </Button>
      {signOut.isError ? <Notice error={signOut.error} /> : null}
    </div>
  );
}
