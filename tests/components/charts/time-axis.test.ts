import { describe, expect, it } from 'vitest';
import { clampRange, panBy, pinch, spanOf, timeScale, zoomAbout, type AxisLimits } from '../../../components/charts/time-axis.ts';
import { presetOf, presetRange, presets } from '../../../components/charts/presets.ts';

const hourMs = 3_600_000;
const limits: AxisLimits = { earliestMs: 0, latestMs: 1000 * hourMs, minSpanMs: hourMs, maxSpanMs: 500 * hourMs };
const range = { fromMs: 400 * hourMs, toMs: 500 * hourMs };

describe('clampRange', () => {
  it('leaves a range that keeps to the limits', () => {
    expect(clampRange(range, limits)).toEqual(range);
  });
  it('shifts a range back from the latest time without squeezing it', () => {
    expect(clampRange({ fromMs: 950 * hourMs, toMs: 1050 * hourMs }, limits)).toEqual({ fromMs: 900 * hourMs, toMs: 1000 * hourMs });
  });
  it('shifts a range forward from the earliest time', () => {
    expect(clampRange({ fromMs: -10 * hourMs, toMs: 90 * hourMs }, limits)).toEqual({ fromMs: 0, toMs: 100 * hourMs });
  });
  it('widens what is too narrow about its centre and narrows what is too wide', () => {
    expect(clampRange({ fromMs: 10 * hourMs, toMs: 10 * hourMs }, limits)).toEqual({ fromMs: 9.5 * hourMs, toMs: 10.5 * hourMs });
    expect(spanOf(clampRange({ fromMs: 0, toMs: 900 * hourMs }, limits))).toBe(500 * hourMs);
  });
  it('shows at least the shortest span where there is less history than that', () => {
    const young = { ...limits, earliestMs: 999.9 * hourMs };
    expect(spanOf(clampRange(range, young))).toBe(hourMs);
  });
});

describe('panBy', () => {
  it('moves both ends by the same time', () => {
    expect(panBy(range, -50 * hourMs, limits)).toEqual({ fromMs: 350 * hourMs, toMs: 450 * hourMs });
  });
  it('stops at the latest time with the span kept', () => {
    expect(panBy(range, 10_000 * hourMs, limits)).toEqual({ fromMs: 900 * hourMs, toMs: 1000 * hourMs });
  });
});

describe('zoomAbout', () => {
  it('keeps the anchor in its place on the screen', () => {
    const anchorMs = 425 * hourMs;
    const zoomed = zoomAbout(range, 0.5, anchorMs, limits);
    expect(spanOf(zoomed)).toBe(50 * hourMs);
    expect((anchorMs - zoomed.fromMs) / spanOf(zoomed)).toBeCloseTo(0.25, 9);
  });
  it('goes no nearer than the shortest span and no further than the longest', () => {
    expect(spanOf(zoomAbout(range, 0.000001, 450 * hourMs, limits))).toBe(hourMs);
    expect(spanOf(zoomAbout(range, 1e6, 450 * hourMs, limits))).toBe(500 * hourMs);
  });
  it('keeps to the latest time when it is zoomed out at the end', () => {
    const zoomed = zoomAbout({ fromMs: 900 * hourMs, toMs: 1000 * hourMs }, 2, 950 * hourMs, limits);
    expect(zoomed).toEqual({ fromMs: 800 * hourMs, toMs: 1000 * hourMs });
  });
});

describe('pinch', () => {
  it('shows half the time when the fingers are twice as far apart', () => {
    const zoomed = pinch(range, [0.4, 0.6], [0.3, 0.7], limits);
    expect(spanOf(zoomed)).toBe(50 * hourMs);
    expect((zoomed.fromMs + zoomed.toMs) / 2).toBeCloseTo(450 * hourMs, 3);
  });
  it('keeps the time under the middle of both fingers under it', () => {
    const zoomed = pinch(range, [0.2, 0.4], [0.5, 0.9], limits);
    const middleBefore = range.fromMs + 0.3 * spanOf(range);
    const middleAfter = zoomed.fromMs + 0.7 * spanOf(zoomed);
    expect(Math.abs(middleAfter - middleBefore)).toBeLessThan(5);
  });
  it('survives two fingers in one place', () => {
    const zoomed = pinch(range, [0.5, 0.5], [0.5, 0.5], limits);
    expect(zoomed).toEqual(range);
  });
});

describe('timeScale', () => {
  it('turns times to places and back', () => {
    const scale = timeScale(range, 48, 300);
    expect(scale.toX(range.fromMs)).toBe(48);
    expect(scale.toX(range.toMs)).toBe(348);
    expect(scale.toMs(scale.toX(437 * hourMs))).toBeCloseTo(437 * hourMs, 3);
  });
});

describe('presets', () => {
  const nowMs = Date.parse('2026-06-01T12:00:00Z');
  it('runs from 24 hours to a year', () => {
    expect(presets.map((preset) => preset.label)).toEqual(['24 h', '3 d', '7 d', '30 d', '90 d', '1 y']);
  });
  it('recognises every preset from its own range, also a little later', () => {
    for (const preset of presets) {
      expect(presetOf(presetRange(preset, nowMs), nowMs)).toBe(preset);
      expect(presetOf(presetRange(preset, nowMs), nowMs + preset.spanMs / 100)).toBe(preset);
    }
  });
  it('recognises none in a range that was panned or zoomed', () => {
    const day = presetRange(presets[0] ?? { id: '', label: '', words: '', spanMs: 0 }, nowMs);
    expect(presetOf({ fromMs: day.fromMs - 4 * hourMs, toMs: day.toMs - 4 * hourMs }, nowMs)).toBeNull();
    expect(presetOf({ fromMs: day.fromMs - 4 * hourMs, toMs: day.toMs }, nowMs)).toBeNull();
  });
});
