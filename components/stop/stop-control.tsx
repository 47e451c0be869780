import { useEffect, useState } from 'react';
import { isAtLeast } from '#shared/domain/role.ts';
import type { System } from '#shared/contract/systems.ts';
import { useDevices, useHeads } from '../../hooks/use-rig.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useStop } from '../../hooks/use-stop.ts';
import { formatNear } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { ConfirmStop } from './confirm-stop.tsx';
import { ResumePanel } from './resume-panel.tsx';
import { StopButton } from './stop-button.tsx';
import { StopOutcome } from './stop-outcome.tsx';
import { carbonHeads, stopState } from './stop-words.ts';

/** How long "Stop now" is offered after a press, in milliseconds. */
const confirmMs = 10_000;

type Panel = 'none' | 'confirm' | 'outcome' | 'resume';

/** Stop dosing, always in reach; afterwards what happened at the pump, and the way to resume for those who may. */
export function StopControl({ system }: { system: System }) {
  const heads = useHeads(system.id).data ?? [];
  const devices = useDevices(system.id).data ?? [];
  const stop = useStop(system.id);
  const nowMs = useNow(30_000);
  const [panel, setPanel] = useState<Panel>('none');
  const state = stopState(heads);
  const isAllStopped = state.stopped.length > 0 && state.running.length === 0;

  useEffect(() => {
    if (panel !== 'confirm') return undefined;
    const timer = setTimeout(() => setPanel('none'), confirmMs);
    return () => clearTimeout(timer);
  }, [panel]);

  function stopNow(): void {
    setPanel('outcome');
    stop.mutate(undefined);
  }

  return (
    <section className="stop" aria-label="Dosing">
      {panel === 'confirm' ? <ConfirmStop heads={carbonHeads(heads)} onStop={stopNow} onCancel={() => setPanel('none')} /> : null}
      {panel === 'outcome' ? (
        <StopOutcome
          stop={stop}
          heads={heads}
          devices={devices}
          timeZone={system.timeZone}
          onAgain={stopNow}
          onClose={() => setPanel('none')}
        />
      ) : null}
      {panel === 'resume' ? (
        <ResumePanel system={system} heads={state.stopped} latched={system.status.latched} onClose={() => setPanel('none')} />
      ) : null}
      <div className="stop-bar">
        {isAllStopped && panel !== 'outcome' ? (
          <div style={{ display: 'flex', flexWrap: 'wrap', alignItems: 'center', justifyContent: 'space-between', gap: 8, minHeight: 48 }}>
            <span style={{ display: 'flex', alignItems: 'center', gap: 8, fontWeight: 700 }}>
              <span className="stop-mark" aria-hidden="true" />
              {state.since === null ? 'Dosing is stopped' : `Stopped since ${formatNear(state.since, system.timeZone, nowMs)}`}
            </span>
            {isAtLeast(system.role, 'keeper') ? (
              <Button onPress={() => setPanel('resume')}>Resume</Button>
            ) : (
              <span className="round-soft">A keeper or the owner resumes</span>
            )}
          </div>
        ) : (
          <StopButton onHeld={stopNow} onPressed={() => setPanel(panel === 'confirm' ? 'none' : 'confirm')} isOpen={panel === 'confirm'} />
        )}
      </div>
    </section>
  );
}
