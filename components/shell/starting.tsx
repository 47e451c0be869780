import { session, type SessionState } from '../../lib/session.ts';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Wordmark } from './wordmark.tsx';

/** Before it is known who is signed in. */
export function Starting({ state }: { state: SessionState }) {
  return (
    <main id="content" className="page-narrow">
      <Wordmark />
      {state.status === 'unreachable' ? (
        <Notice
          sentence="No connection to Steadfall. Pumps keep their own schedule meanwhile."
          onRetry={() => {
            session.refresh().catch(() => undefined);
          }}
        />
      ) : (
        <Skeleton lines={3} name="Opening Steadfall" />
      )}
    </main>
  );
}
