import { describe, expect, it } from 'vitest';
import { viewAfterKey, type ChartView } from '../../../components/charts/chart-keys.ts';
import { dragWindow, gripAt } from '../../../components/charts/context-window.ts';

const hourMs = 3_600_000;
const limits = { earliestMs: 0, latestMs: 1000 * hourMs, minSpanMs: hourMs, maxSpanMs: 800 * hourMs };
const range = { fromMs: 400 * hourMs, toMs: 460 * hourMs };
const view: ChartView = { range, crosshairMs: 430 * hourMs };

describe('viewAfterKey', () => {
  it('moves the crosshair by a sixtieth of the range, ten times as far with Shift', () => {
    expect(viewAfterKey(view, 'ArrowRight', false, limits)).toEqual({ range, crosshairMs: 431 * hourMs });
    expect(viewAfterKey(view, 'ArrowLeft', true, limits)).toEqual({ range, crosshairMs: 420 * hourMs });
  });
  it('starts the crosshair from the middle', () => {
    expect(viewAfterKey({ range, crosshairMs: null }, 'ArrowRight', false, limits)?.crosshairMs).toBe(431 * hourMs);
  });
  it('brings the range after a crosshair that leaves it', () => {
    const next = viewAfterKey({ range, crosshairMs: 460 * hourMs }, 'ArrowRight', false, limits);
    expect(next).toEqual({ range: { fromMs: 401 * hourMs, toMs: 461 * hourMs }, crosshairMs: 461 * hourMs });
  });
  it('stops the crosshair at the latest time', () => {
    const end = { range: { fromMs: 940 * hourMs, toMs: 1000 * hourMs }, crosshairMs: 1000 * hourMs };
    expect(viewAfterKey(end, 'ArrowRight', false, limits)).toEqual(end);
  });
  it('zooms about the crosshair with + and -', () => {
    expect(viewAfterKey(view, '+', false, limits)?.range).toEqual({ fromMs: 410 * hourMs, toMs: 450 * hourMs });
    expect(viewAfterKey(view, '-', false, limits)?.range).toEqual({ fromMs: 385 * hourMs, toMs: 475 * hourMs });
  });
  it('goes to the edges and pans by a screen', () => {
    expect(viewAfterKey(view, 'Home', false, limits)?.crosshairMs).toBe(range.fromMs);
    expect(viewAfterKey(view, 'End', false, limits)?.crosshairMs).toBe(range.toMs);
    expect(viewAfterKey(view, 'PageUp', false, limits)?.range).toEqual({ fromMs: 340 * hourMs, toMs: 400 * hourMs });
    expect(viewAfterKey(view, 'PageDown', false, limits)?.range).toEqual({ fromMs: 460 * hourMs, toMs: 520 * hourMs });
  });
  it('leaves other keys to the page', () => {
    expect(viewAfterKey(view, 'Tab', false, limits)).toBeNull();
    expect(viewAfterKey(view, 'ArrowDown', false, limits)).toBeNull();
  });
});

describe('the window of the context strip', () => {
  it('is caught by its ends, by its inside, or pressed beside', () => {
    const window = { left: 100, right: 200 };
    expect([80, 95, 110, 150, 190, 205, 230].map((x) => gripAt(x, window))).toEqual([
      'outside',
      'start',
      'start',
      'inside',
      'end',
      'end',
      'outside',
    ]);
  });
  it('can be moved by its inside when it is narrow, and resized from just outside', () => {
    const window = { left: 100, right: 106 };
    expect([95, 103, 110].map((x) => gripAt(x, window))).toEqual(['start', 'inside', 'end']);
  });
  it('moves and resizes the range within the limits', () => {
    expect(dragWindow(range, 'inside', 10 * hourMs, 0, limits)).toEqual({ fromMs: 410 * hourMs, toMs: 470 * hourMs });
    expect(dragWindow(range, 'start', -100 * hourMs, 0, limits)).toEqual({ fromMs: 300 * hourMs, toMs: 460 * hourMs });
    expect(dragWindow(range, 'end', 100 * hourMs, 0, limits)).toEqual({ fromMs: 400 * hourMs, toMs: 560 * hourMs });
    expect(dragWindow(range, 'outside', 0, 800 * hourMs, limits)).toEqual({ fromMs: 770 * hourMs, toMs: 830 * hourMs });
  });
  it('never turns over, and never ends after the latest time', () => {
    expect(dragWindow(range, 'start', 500 * hourMs, 0, limits)).toEqual({ fromMs: 459 * hourMs, toMs: 460 * hourMs });
    expect(dragWindow(range, 'end', -500 * hourMs, 0, limits)).toEqual({ fromMs: 400 * hourMs, toMs: 401 * hourMs });
    expect(dragWindow(range, 'end', 5000 * hourMs, 0, limits)).toEqual({ fromMs: 400 * hourMs, toMs: 1000 * hourMs });
  });
});
