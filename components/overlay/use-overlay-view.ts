import { useCallback, useMemo, useState } from 'react';
import { useNow } from '../../hooks/use-now.ts';
import { useSettled } from '../../hooks/use-settled.ts';
import type { ChartView } from '../charts/chart-keys.ts';
import { presetOf, presetRange, startPreset, type Preset } from '../charts/presets.ts';
import type { AxisLimits, TimeRange } from '../charts/time-axis.ts';

const minuteMs = 60_000;
const dayMs = 1440 * minuteMs;

/** How often a range that ends now moves on. */
const followEveryMs = 30_000;
const settleMs = 250;

type Shown = { readonly preset: Preset } | { readonly range: TimeRange };

export interface OverlayView {
  readonly view: ChartView;
  /** The range after the last gesture ended. */
  readonly settledRange: TimeRange;
  readonly limits: AxisLimits;
  readonly preset: Preset | null;
  readonly nowMs: number;
  readonly onView: (view: ChartView) => void;
  readonly onHold: (isHeld: boolean) => void;
  readonly choosePreset: (preset: Preset) => void;
}

/** What the chart stack shows: a preset, which follows the time, or a range that a person moved to. */
export function useOverlayView(earliestMs: number): OverlayView {
  const nowMs = useNow(followEveryMs);
  const [shown, setShown] = useState<Shown>({ preset: startPreset });
  const [crosshairMs, setCrosshairMs] = useState<number | null>(null);
  const limits = useMemo<AxisLimits>(
    () => ({ earliestMs: Math.min(earliestMs, nowMs - 366 * dayMs), latestMs: nowMs, minSpanMs: 10 * minuteMs, maxSpanMs: 731 * dayMs }),
    [earliestMs, nowMs],
  );
  const range = useMemo(() => ('range' in shown ? shown.range : presetRange(shown.preset, nowMs)), [shown, nowMs]);
  const [isHeld, setIsHeld] = useState(false);
  const settledRange = useSettled(range, settleMs, isHeld);
  const onView = useCallback(
    (next: ChartView) => {
      setCrosshairMs(next.crosshairMs);
      if (next.range === range) return;
      const preset = presetOf(next.range, nowMs);
      setShown(preset ? { preset } : { range: next.range });
    },
    [range, nowMs],
  );
  const choosePreset = useCallback((preset: Preset) => setShown({ preset }), []);
  const view = useMemo(() => ({ range, crosshairMs }), [range, crosshairMs]);
  return { view, settledRange, limits, preset: 'preset' in shown ? shown.preset : null, nowMs, onView, onHold: setIsHeld, choosePreset };
}
