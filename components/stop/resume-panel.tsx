import { useEffect, useRef } from 'react';
import type { Head } from '#shared/contract/rig.ts';
import type { System } from '#shared/contract/systems.ts';
import { useResume } from '../../hooks/use-stop.ts';
import { Button } from '../ui/button.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Text } from '../ui/text.tsx';
import { headName, resumeLine } from './stop-words.ts';

/** Resuming is the danger, so it says what starts, and what the pump answered. */
export function ResumePanel({
  system,
  heads,
  allHeads,
  latched,
  onClose,
}: {
  system: System;
  /** The stopped ones. */
  heads: readonly Head[];
  /** To name those that dose again by now. */
  allHeads: readonly Head[];
  latched: boolean;
  onClose: () => void;
}) {
  const resume = useResume(system.id);
  const first = useRef<HTMLButtonElement>(null);
  useEffect(() => first.current?.focus(), []);
  const lines = resume.data?.orders.map((order) => resumeLine(order, allHeads)) ?? [];
  return (
    <section className="stop-panel" aria-label="Resume dosing" onKeyDown={(event) => event.key === 'Escape' && onClose()}>
      {latched ? (
        <>
          <Text>An alarm keeps dosing stopped. Find the cause and reset the alarm first.</Text>
          <LinkText href={`/systems/${system.id}/alarms`} block>
            To the alarms
          </LinkText>
        </>
      ) : (
        <>
          <Text bold>This lets dose again:</Text>
          <ul>
            {heads.map((head) => (
              <li key={head.id}>{headName(head)}</li>
            ))}
          </ul>
          <Text variant="note" soft>
            What was missed is not made up.
          </Text>
        </>
      )}
      <div role="alert">
        {resume.isPending ? <Text>Asked the pump...</Text> : null}
        {lines.map((line) => (
          <Text key={line.orderId} bold>
            {`${line.head}: ${line.sentence}`}
          </Text>
        ))}
      </div>
      {resume.isError ? <Notice error={resume.error} /> : null}
      <div className="stop-panel-buttons">
        {latched || resume.isSuccess ? null : (
          <Button ref={first} kind="primary" busy={resume.isPending} onPress={() => resume.mutate(heads.map((head) => head.id))}>
            Resume
          </Button>
        )}
        <Button onPress={onClose}>Close</Button>
      </div>
    </section>
  );
}
