import type { Device } from '#shared/contract/devices.ts';
import type { Head } from '#shared/contract/rig.ts';
import type { useStop } from '../../hooks/use-stop.ts';
import { problemFrom, problemSentence } from '../../lib/api-problem.ts';
import { pullThePlug } from '../../lib/codes/order-words.ts';
import { Button } from '../ui/button.tsx';
import { Text } from '../ui/text.tsx';
import { stopLine } from './stop-words.ts';

export interface StopOutcomeProps {
  stop: ReturnType<typeof useStop>;
  heads: readonly Head[];
  devices: readonly Device[];
  timeZone: string;
  onAgain: () => void;
  onClose: () => void;
}

/** What happened at the pump, from its answer and then from its live state. */
export function StopOutcome({ stop, heads, devices, timeZone, onAgain, onClose }: StopOutcomeProps) {
  const lines = stop.data?.orders.map((order) => stopLine(order, heads, devices, timeZone)) ?? [];
  const isUnsure = stop.isError || lines.some((line) => !line.isStopped);
  return (
    <section className="stop-panel" aria-label="What happened at the pump">
      <div role="alert" style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
        {stop.isPending ? <Text>Asked the pump...</Text> : null}
        {stop.isError ? (
          <Text>
            {problemSentence(problemFrom(stop.error))} {pullThePlug}
          </Text>
        ) : null}
        {lines.map((line) => (
          <div key={line.orderId}>
            <Text variant="note" soft>
              {line.head}
            </Text>
            <Text bold>{line.sentence}</Text>
          </div>
        ))}
        {stop.isSuccess && lines.length === 0 ? <Text>No carbon head is in use here, so there was nothing to stop.</Text> : null}
      </div>
      <div className="stop-panel-buttons">
        {!stop.isPending && isUnsure ? <Button onPress={onAgain}>Ask again</Button> : null}
        {stop.isPending ? null : <Button onPress={onClose}>Close</Button>}
      </div>
    </section>
  );
}
