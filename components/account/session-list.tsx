import { useEndSession, useSessions } from '../../hooks/use-me.ts';
import { useNow } from '../../hooks/use-now.ts';
import { browserWords } from '../../lib/format/browser.ts';
import { formatAgo } from '../../lib/format/time.ts';
import { browserTimeZone } from '../../lib/format/time-zones.ts';
import { Button } from '../ui/button.tsx';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { Section } from '../ui/section.tsx';

/** Where one is signed in, and the way to end each. */
export function SessionList() {
  const sessions = useSessions();
  const end = useEndSession();
  const nowMs = useNow(30_000);
  const zone = browserTimeZone();
  return (
    <Section title="Where you are signed in">
      {sessions.isError ? <Notice error={sessions.error} onRetry={() => void sessions.refetch()} /> : null}
      {sessions.isPending ? <Skeleton lines={2} name="Loading sessions" /> : null}
      <ul className="rounds">
        {sessions.data?.map((session) => (
          <li key={session.id} className="round">
            <span className="round-head">
              <Text>{browserWords(session.userAgent)}</Text>
              {session.current ? (
                <Text soft>this one</Text>
              ) : (
                <Button kind="quiet" name={`End session in ${browserWords(session.userAgent)}`} onPress={() => end.mutate(session.id)}>
                  End
                </Button>
              )}
            </span>
            <Text variant="note" soft>{`used ${formatAgo(session.lastUsedAt, zone, nowMs)}`}</Text>
          </li>
        ))}
      </ul>
      {end.isError ? <Notice error={end.error} /> : null}
    </Section>
  );
}
