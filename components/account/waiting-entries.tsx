import { useOutbox, useOutboxActions } from '../../hooks/use-outbox.ts';
import type { WaitingCall } from '../../lib/outbox.ts';
import { Button } from '../ui/button.tsx';
import { Text } from '../ui/text.tsx';
import { Section } from '../ui/section.tsx';

const names: Record<WaitingCall, string> = {
  createTest: 'A test',
  updateTest: 'A correction of a test',
  deleteTest: 'Taking out a test',
  createHandDose: 'A hand dose',
  createEvent: 'An event',
  createRefill: 'A refill',
};

/** What was written without network: it waits here until it is sent, or until its writer gives it up. */
export function WaitingEntries() {
  const entries = useOutbox();
  const { sendNow, discard } = useOutboxActions();
  if (entries.length === 0) return null;
  return (
    <Section title="Waiting to be sent">
      <ul className="rounds">
        {entries.map((entry) => (
          <li key={entry.id} className="round">
            <span className="round-head">
              <Text>{`${names[entry.name]}, written ${new Date(entry.writtenAtMs).toLocaleString()}`}</Text>
              <Button kind="quiet" onPress={() => discard(entry.id)}>
                Give up
              </Button>
            </span>
            <Text variant="note" soft>
              {entry.refused === null ? 'Sent when there is a connection' : `Refused: ${entry.refused}`}
            </Text>
          </li>
        ))}
      </ul>
      <Button onPress={sendNow}>Send now</Button>
    </Section>
  );
}
