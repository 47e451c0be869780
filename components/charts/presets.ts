import type { TimeRange } from './time-axis.ts';
import { spanOf } from './time-axis.ts';

const hourMs = 3_600_000;
const dayMs = 24 * hourMs;

export interface Preset {
  readonly id: string;
  readonly label: string;
  /** As it begins a sentence: "Last 7 days". */
  readonly words: string;
  readonly spanMs: number;
}

/** What a chart opens with: a week, since tests come weekly. */
export const startPreset: Preset = { id: '7d', label: '7 d', words: 'Last 7 days', spanMs: 7 * dayMs };

export const presets: readonly Preset[] = [
  { id: '24h', label: '24 h', words: 'Last 24 hours', spanMs: dayMs },
  { id: '3d', label: '3 d', words: 'Last 3 days', spanMs: 3 * dayMs },
  startPreset,
  { id: '30d', label: '30 d', words: 'Last 30 days', spanMs: 30 * dayMs },
  { id: '90d', label: '90 d', words: 'Last 90 days', spanMs: 90 * dayMs },
  { id: '1y', label: '1 y', words: 'Last year', spanMs: 365 * dayMs },
];

export function presetRange(preset: Preset, nowMs: number): TimeRange {
  return { fromMs: nowMs - preset.spanMs, toMs: nowMs };
}

/** The preset that a range still stands for: the same span, ending within 2 % of it from now. */
export function presetOf(range: TimeRange, nowMs: number): Preset | null {
  const found = presets.find(
    (preset) => Math.abs(spanOf(range) - preset.spanMs) <= preset.spanMs / 1000 && Math.abs(range.toMs - nowMs) <= preset.spanMs / 50,
  );
  return found ?? null;
}
