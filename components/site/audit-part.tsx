import { useState } from 'react';
import { useNow } from '../../hooks/use-now.ts';
import { useAudit } from '../../hooks/use-sites.ts';
import { auditSentence } from '../../lib/codes/audit-words.ts';
import { formatNear } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { Notice } from '../ui/notice.tsx';
import { Section } from '../ui/section.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';

/** How many entries stand there before one asks for all. */
const shortCount = 12;

/** Who did what in the site, newest first. */
export function AuditPart({ siteId, timeZone }: { siteId: string; timeZone: string }) {
  const audit = useAudit(siteId, true);
  const nowMs = useNow(60_000);
  const [isWhole, setWhole] = useState(false);
  const entries = [...(audit.data ?? [])].sort((a, b) => Date.parse(b.at) - Date.parse(a.at) || b.seq - a.seq);
  const shown = isWhole ? entries : entries.slice(0, shortCount);
  return (
    <Section title="Who did what">
      {audit.isError ? <Notice error={audit.error} onRetry={() => void audit.refetch()} /> : null}
      {audit.isPending ? <Skeleton lines={4} name="Loading who did what" /> : null}
      {audit.data?.length === 0 ? <Text soft>Nothing yet.</Text> : null}
      <ul className="rounds" aria-label="Who did what, newest first">
        {shown.map((entry) => (
          <li key={entry.seq} className="round">
            <Text>{auditSentence(entry)}</Text>
            <span className="round-soft">{formatNear(entry.at, timeZone, nowMs)}</span>
          </li>
        ))}
      </ul>
      {entries.length > shortCount ? (
        <Button expanded={isWhole} onPress={() => setWhole(!isWhole)}>
          {isWhole ? 'Show fewer' : `Show the newest ${entries.length}`}
        </Button>
      ) : null}
    </Section>
  );
}
