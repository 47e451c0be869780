import type { AxisLimits, TimeRange } from './time-axis.ts';
import { panBy, spanOf, zoomAbout } from './time-axis.ts';

export interface ChartView {
  readonly range: TimeRange;
  readonly crosshairMs: number | null;
}

const stepsAcross = 60;
const bigStep = 10;
const zoomFactor = 1.5;

function moveCrosshair(view: ChartView, steps: number, limits: AxisLimits): ChartView {
  const { range } = view;
  const stepMs = spanOf(range) / stepsAcross;
  const startMs = view.crosshairMs ?? (range.fromMs + range.toMs) / 2;
  const crosshairMs = Math.min(Math.max(startMs + steps * stepMs, limits.earliestMs), limits.latestMs);
  // The range follows a crosshair that leaves it.
  const overMs = Math.max(0, crosshairMs - range.toMs) + Math.min(0, crosshairMs - range.fromMs);
  return { crosshairMs, range: overMs === 0 ? range : panBy(range, overMs, limits) };
}

/**
 * What a key does to a chart, or null when it is not for the chart. Arrows move the crosshair (ten times as far with
 * Shift), Home and End to the edges, Page keys pan by a screen, + and - zoom about the crosshair.
 */
export function viewAfterKey(view: ChartView, key: string, shift: boolean, limits: AxisLimits): ChartView | null {
  const { range } = view;
  const anchorMs = view.crosshairMs ?? (range.fromMs + range.toMs) / 2;
  const steps = shift ? bigStep : 1;
  switch (key) {
    case 'ArrowLeft':
      return moveCrosshair(view, -steps, limits);
    case 'ArrowRight':
      return moveCrosshair(view, steps, limits);
    case 'Home':
      return { ...view, crosshairMs: range.fromMs };
    case 'End':
      return { ...view, crosshairMs: range.toMs };
    case 'PageUp':
      return { ...view, range: panBy(range, -spanOf(range), limits) };
    case 'PageDown':
      return { ...view, range: panBy(range, spanOf(range), limits) };
    case '+':
    case '=':
      return { ...view, range: zoomAbout(range, 1 / zoomFactor, anchorMs, limits) };
    case '-':
    case '_':
      return { ...view, range: zoomAbout(range, zoomFactor, anchorMs, limits) };
    default:
      return null;
  }
}
