import { DateTime } from 'luxon';
import { Button } from '../ui/button.tsx';
import { Text } from '../ui/text.tsx';
import type { Reading } from '../charts/nearest.ts';

export interface OverlayReadoutProps {
  crosshairMs: number;
  readings: readonly Reading[];
  zone: string;
  onEditTest?: (testId: string) => void;
}

/** What every lane says at the crosshair; a test carries the time at which it was made, since that is seldom the crosshair's. */
export function OverlayReadout({ crosshairMs, readings, zone, onEditTest }: OverlayReadoutProps) {
  const when = (tMs: number, format: string) => DateTime.fromMillis(tMs, { zone }).toFormat(format);
  return (
    <section className="overlay-readout" aria-label="At the crosshair">
      <Text variant="note" bold>
        {when(crosshairMs, 'cccc d LLLL yyyy, HH:mm')}
      </Text>
      <dl className="overlay-readout-list">
        {readings.map((reading, i) => (
          <div key={`${reading.laneId} ${i}`} className="overlay-readout-row">
            <dt>
              <Text variant="note" soft>
                {reading.title}
              </Text>
            </dt>
            <dd>
              <Text variant="note">{reading.text}</Text>
              {reading.tMs !== null && (
                <Text variant="note" soft>
                  {when(reading.tMs, 'd LLL, HH:mm')}
                </Text>
              )}
              {reading.testId !== null && onEditTest !== undefined && (
                <EditButton testId={reading.testId} title={reading.title} onEdit={onEditTest} />
              )}
            </dd>
          </div>
        ))}
      </dl>
    </section>
  );
}

function EditButton({ testId, title, onEdit }: { testId: string; title: string; onEdit: (testId: string) => void }) {
  return (
    <Button kind="quiet" onPress={() => onEdit(testId)} name={`Edit this ${title.toLowerCase()} test`}>
      Edit
    </Button>
  );
}
