import { useMail } from '../../hooks/use-sites.ts';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { Section } from '../ui/section.tsx';

const stateWords = { waiting: 'waiting', sent: 'sent', kept: 'kept here: no mail server is set', failed: 'could not be sent' } as const;

/** Mail of this site; without a mail server this is where an owner reads it, and passes its links on. */
export function MailList({ siteId }: { siteId: string }) {
  const mail = useMail(siteId, true);
  return (
    <Section title="Mail">
      {mail.isError ? <Notice error={mail.error} onRetry={() => void mail.refetch()} /> : null}
      {mail.isPending ? <Skeleton lines={2} name="Loading mail" /> : null}
      {mail.data?.length === 0 ? <Text soft>No mail yet. Invitations and alarms appear here.</Text> : null}
      <ul className="rounds">
        {mail.data?.map((letter) => (
          <li key={letter.id} className="round">
            <details>
              <summary style={{ minHeight: 44, paddingBlock: 10, cursor: 'pointer' }}>
                {letter.subject}
                <span className="round-soft">{` to ${letter.to}, ${stateWords[letter.state]}`}</span>
              </summary>
              <Text>{letter.body}</Text>
            </details>
          </li>
        ))}
      </ul>
    </Section>
  );
}
