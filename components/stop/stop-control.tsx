import { useEffect, useState } from 'react';
import type { System } from '#shared/contract/systems.ts';
import { useDevices, useHeads } from '../../hooks/use-rig.ts';
import { useStop } from '../../hooks/use-stop.ts';
import { ConfirmStop } from './confirm-stop.tsx';
import { ResumePanel } from './resume-panel.tsx';
import { StopButton } from './stop-button.tsx';
import { StopOutcome } from './stop-outcome.tsx';
import { StopStanding } from './stop-standing.tsx';
import { carbonHeads, stopState } from './stop-words.ts';

/** How long "Stop now" is offered after a press, in milliseconds. */
const confirmMs = 10_000;

type Panel = 'none' | 'confirm' | 'outcome' | 'resume';

/**
 * Stop dosing, always in reach, also when all is stopped: asking again sends the order again. Above it what the pump said, and
 * the way to resume for those who may.
 */
export function StopControl({ system }: { system: System }) {
  const heads = useHeads(system.id).data ?? [];
  const devices = useDevices(system.id).data ?? [];
  const stop = useStop(system.id);
  const [panel, setPanel] = useState<Panel>('none');

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
        <ResumePanel
          system={system}
          heads={stopState(heads).stopped}
          allHeads={heads}
          latched={system.status.latched}
          onClose={() => setPanel('none')}
        />
      ) : null}
      <div className="stop-bar">
        {panel === 'outcome' ? null : <StopStanding system={system} heads={heads} onResume={() => setPanel('resume')} />}
        <StopButton onHeld={stopNow} onPressed={() => setPanel(panel === 'confirm' ? 'none' : 'confirm')} isOpen={panel === 'confirm'} />
      </div>
    </section>
  );
}
