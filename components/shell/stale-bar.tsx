import { useFreshness } from '../../hooks/use-freshness.ts';
import { useOutbox } from '../../hooks/use-outbox.ts';
import { StateWord } from '../ui/state-word.tsx';

function sentence(isStale: boolean, waiting: number): string | null {
  const kept = waiting === 0 ? '' : ` ${waiting === 1 ? 'One entry waits' : `${waiting} entries wait`} to be sent.`;
  if (isStale) return `No connection: what you see may be old.${kept}`;
  return kept === '' ? null : kept.trim();
}

/** Says in place that the page is cut off, and what waits to be sent. */
export function StaleBar() {
  const { fresh } = useFreshness();
  const waiting = useOutbox().filter((entry) => entry.refused === null).length;
  const said = sentence(!fresh, waiting);
  return (
    <div role="status">
      {said === null ? null : (
        <div className="stale-bar">
          <StateWord mark="unknown">{said}</StateWord>
        </div>
      )}
    </div>
  );
}
