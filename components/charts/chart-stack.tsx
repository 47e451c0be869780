import { DateTime } from 'luxon';
import { useMemo, useRef, type KeyboardEvent } from 'react';
import type { ThemeTokens } from '../../constants/tokens.ts';
import { ChartLane } from './chart-lane.tsx';
import { viewAfterKey, type ChartView } from './chart-keys.ts';
import './charts.css';
import type { LaneFrame, LaneInput } from './lane-model.ts';
import { placedTimeTicks, plotOf } from './lane-model.ts';
import type { Reading } from './nearest.ts';
import type { AxisLimits, TimeRange } from './time-axis.ts';
import { timeScale } from './time-axis.ts';
import { TimeAxisRow } from './time-axis-row.tsx';
import { useChartGestures } from './use-chart-gestures.ts';
import { useElementWidth } from './use-element-width.ts';

export interface ChartStackProps {
  lanes: readonly LaneInput[];
  view: ChartView;
  settledRange: TimeRange;
  limits: AxisLimits;
  zone: string;
  laneHeightPx: number;
  readings: readonly Reading[];
  tokens: ThemeTokens;
  onView: (view: ChartView) => void;
  /** A drag began or ended. */
  onHold: (isHeld: boolean) => void;
}

const axisHeightRem = 1.75;

/** What the crosshair says, for a screen reader. */
function spokenReadings(crosshairMs: number | null, readings: readonly Reading[], zone: string): string {
  if (crosshairMs === null) return 'No time chosen. Use the arrow keys.';
  const when = DateTime.fromMillis(crosshairMs, { zone }).toFormat('d LLLL, HH:mm');
  return `${when}. ${readings.map((reading) => `${reading.title} ${reading.text}`).join('. ')}`;
}

/** Lanes under each other that share one time axis, one crosshair, and the gestures and keys that move them. */
export function ChartStack({ lanes, view, settledRange, limits, zone, laneHeightPx, readings, tokens, onView, onHold }: ChartStackProps) {
  const surface = useRef<HTMLDivElement>(null);
  const handle = useRef<HTMLDivElement>(null);
  const { widthPx, remPx } = useElementWidth(surface);
  const { range, crosshairMs } = view;
  const frame = useMemo<LaneFrame>(
    () => ({ range, zone, widthPx, heightPx: laneHeightPx, remPx }),
    [range, zone, widthPx, laneHeightPx, remPx],
  );
  const ticks = useMemo(() => placedTimeTicks(frame), [frame]);
  const axisFrame = useMemo(() => ({ ...frame, heightPx: axisHeightRem * remPx }), [frame, remPx]);
  const plot = plotOf(frame);

  useChartGestures(surface, {
    range,
    limits,
    plotLeftPx: plot.left,
    plotWidthPx: plot.right - plot.left,
    onRange: (next) => onView({ range: next, crosshairMs }),
    onCrosshair: (tMs) => onView({ range, crosshairMs: tMs }),
    onHold,
  });

  function onKeyDown(event: KeyboardEvent): void {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    const next = viewAfterKey(view, event.key, event.shiftKey, limits);
    if (next === null) return;
    event.preventDefault();
    onView(next);
  }

  const isCrosshairSeen = crosshairMs !== null && crosshairMs >= range.fromMs && crosshairMs <= range.toMs;
  const crosshairX = isCrosshairSeen ? timeScale(range, plot.left, plot.right - plot.left).toX(crosshairMs) : null;
  return (
    <div className="chart-stack">
      <div
        ref={handle}
        className="chart-handle"
        role="slider"
        tabIndex={0}
        aria-label="Time of the crosshair"
        aria-valuemin={Math.round(range.fromMs / 1000)}
        aria-valuemax={Math.round(range.toMs / 1000)}
        aria-valuenow={Math.round((isCrosshairSeen ? crosshairMs : (range.fromMs + range.toMs) / 2) / 1000)}
        aria-valuetext={spokenReadings(crosshairMs, readings, zone)}
        onKeyDown={onKeyDown}
      />
      <div ref={surface} className="chart-surface" onClick={() => handle.current?.focus({ preventScroll: true })}>
        {widthPx > 0 && (
          <>
            <TimeAxisRow frame={axisFrame} ticks={ticks} />
            {lanes.map((lane) => (
              <ChartLane
                key={lane.id}
                lane={lane}
                frame={frame}
                ticks={ticks}
                settledRange={settledRange}
                crosshairX={crosshairX}
                tokens={tokens}
              />
            ))}
            <TimeAxisRow frame={axisFrame} ticks={ticks} />
          </>
        )}
      </div>
    </div>
  );
}
