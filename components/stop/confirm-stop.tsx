import { useEffect, useRef } from 'react';
import type { Head } from '#shared/contract/rig.ts';
import { Button } from '../ui/button.tsx';
import { Text } from '../ui/text.tsx';
import { headName } from './stop-words.ts';

/** After a press: what stops, and the button that does it, in focus. */
export function ConfirmStop({ heads, onStop, onCancel }: { heads: readonly Head[]; onStop: () => void; onCancel: () => void }) {
  const now = useRef<HTMLButtonElement>(null);
  useEffect(() => now.current?.focus(), []);
  return (
    <section className="stop-panel" aria-label="Confirm the stop" onKeyDown={(event) => event.key === 'Escape' && onCancel()}>
      <Text bold>This stops carbon at:</Text>
      {heads.length === 0 ? <Text>Every head of this system that gives carbon.</Text> : null}
      <ul>
        {heads.map((head) => (
          <li key={head.id}>
            {headName(head)}
            {head.stop === null
              ? ''
              : head.stop.confirmedAt === null
                ? ' (asked already, no answer yet)'
                : ' (stopped at the pump already)'}
          </li>
        ))}
      </ul>
      <Text variant="note" soft>
        It stays stopped until a keeper or the owner resumes. Heads that nobody registered here are asked too.
      </Text>
      <div className="stop-panel-buttons">
        <Button ref={now} kind="primary" onPress={onStop}>
          Stop now
        </Button>
        <Button onPress={onCancel}>Cancel</Button>
      </div>
    </section>
  );
}
