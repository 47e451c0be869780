import { isAtLeast } from '#shared/domain/role.ts';
import type { Head } from '#shared/contract/rig.ts';
import type { System } from '#shared/contract/systems.ts';
import { useNow } from '../../hooks/use-now.ts';
import { Button } from '../ui/button.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Text } from '../ui/text.tsx';
import { stopLines } from './stop-words.ts';

/** How the stopped heads stand at their pumps. Resuming waits until every pump has said that it stopped and no alarm holds it. */
export function StopStanding({ system, heads, onResume }: { system: System; heads: readonly Head[]; onResume: () => void }) {
  const nowMs = useNow(30_000);
  const lines = stopLines(heads, system.timeZone, nowMs);
  const isConfirmed = lines.every((line) => line.isConfirmed);
  const { latched } = system.status;
  const mayResume = isAtLeast(system.role, 'keeper');
  return (
    <div className={lines.length === 0 ? undefined : 'stop-standing'}>
      <LiveRegion>
        {lines.map((line) => (
          <Text key={line.headId} variant="note" bold>
            {line.words}
          </Text>
        ))}
      </LiveRegion>
      {lines.length > 0 && latched ? (
        <>
          <Text variant="note">An alarm keeps dosing stopped until a keeper resets it.</Text>
          <LinkText href={`/systems/${system.id}/alarms`} block>
            To the alarms
          </LinkText>
        </>
      ) : null}
      {lines.length > 0 && !latched && isConfirmed && mayResume ? <Button onPress={onResume}>Resume</Button> : null}
      {lines.length > 0 && !latched && !mayResume ? (
        <Text variant="note" soft>
          A keeper or the owner resumes.
        </Text>
      ) : null}
    </div>
  );
}
