import { cleanup, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { ChartView } from '../../../components/charts/chart-keys.ts';
import { ChartStack } from '../../../components/charts/chart-stack.tsx';
import type { LaneInput } from '../../../components/charts/lane-model.ts';
import { readLanes } from '../../../components/charts/nearest.ts';
import { themes } from '../../../constants/tokens.ts';

const hourMs = 3_600_000;
const dayMs = 24 * hourMs;
const fromMs = Date.parse('2026-06-01T00:00:00Z');
const range = { fromMs, toMs: fromMs + 2 * dayMs };
const limits = { earliestMs: fromMs - 100 * dayMs, latestMs: fromMs + 3 * dayMs, minSpanMs: hourMs, maxSpanMs: 90 * dayMs };

const base = { decimals: 1, fromZero: true, leastSpan: 1, band: null, limits: [], traces: [], tests: null, doses: null };
const hours = Array.from({ length: 48 }, (_, i) => i).filter((h) => h < 10 || h >= 30);
const values = hours.map((h) => 25 + h / 100);
const lanes: LaneInput[] = [
  {
    ...base,
    id: 'nitrate',
    title: 'Nitrate',
    unit: 'mg/L',
    band: { low: 3, high: 10, label: 'aim 3 to 10' },
    tests: { shape: 'circle', dashed: false, points: [{ id: 'a', tMs: fromMs + dayMs, value: 14, below: false, edited: false }] },
  },
  {
    ...base,
    id: 'temperature',
    title: 'Temperature',
    unit: '°C',
    fromZero: false,
    traces: [
      {
        id: 't',
        label: 'Temperature',
        dashed: false,
        columns: {
          resolutionMs: 0,
          t: hours.map((h) => fromMs + h * hourMs),
          min: values,
          mean: values,
          max: values,
          count: values.map(() => 1),
        },
      },
    ],
  },
];

function Stack() {
  const [view, setView] = useState<ChartView>({ range, crosshairMs: null });
  const readings = view.crosshairMs === null ? [] : readLanes(lanes, view.crosshairMs, hourMs);
  return (
    <ChartStack
      lanes={lanes}
      view={view}
      settledRange={view.range}
      limits={limits}
      zone="UTC"
      laneHeightPx={96}
      readings={readings}
      tokens={themes.light}
      onView={setView}
      onHold={() => {}}
    />
  );
}

beforeEach(() => {
  vi.stubGlobal(
    'ResizeObserver',
    class {
      observe() {}
      unobserve() {}
      disconnect() {}
    },
  );
  vi.stubGlobal('matchMedia', () => ({ matches: false, addEventListener: () => {}, removeEventListener: () => {} }));
  vi.spyOn(HTMLElement.prototype, 'clientWidth', 'get').mockReturnValue(358);
  // A browser without WebGL2: the traces are SVG.
  vi.spyOn(HTMLCanvasElement.prototype, 'getContext').mockReturnValue(null);
});
afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
  vi.restoreAllMocks();
});

describe('ChartStack', () => {
  it('says in words what each lane shows', () => {
    render(<Stack />);
    expect(screen.getByRole('img', { name: 'Nitrate, mg/L: one test, 14.0 on 2 June; aim 3 to 10.' })).toBeVisible();
    expect(screen.getByRole('img', { name: /^Temperature, °C: between 25.0 and 25.5, .*no data for 21 h in 1 gap/ })).toBeVisible();
  });
  it('draws the traces as SVG where the browser has no WebGL2, broken at the gap', () => {
    render(<Stack />);
    const lane = screen.getByRole('img', { name: /^Temperature/ });
    const lines = [...lane.querySelectorAll('path')].filter(
      (path) => path.getAttribute('d')?.startsWith('M') && path.getAttribute('d')?.includes('L'),
    );
    expect(lines).toHaveLength(2);
    expect(within(lane).getByText('no data 21 h')).toBeInTheDocument();
    expect(lane.querySelector('canvas')).toBeNull();
  });
  it('moves the crosshair by arrow keys and reads every lane to a screen reader', async () => {
    render(<Stack />);
    const handle = screen.getByRole('slider', { name: 'Time of the crosshair' });
    expect(handle).toHaveAttribute('aria-valuetext', 'No time chosen. Use the arrow keys.');
    await userEvent.tab();
    expect(handle).toHaveFocus();
    await userEvent.keyboard('{Home}{Shift>}{ArrowRight}{/Shift}');
    expect(handle).toHaveAttribute('aria-valuetext', '1 June, 08:00. Nitrate 14.0 mg/L. Temperature 25.1 °C');
    await userEvent.keyboard('{Shift>}{ArrowRight}{/Shift}');
    expect(handle).toHaveAttribute('aria-valuetext', '1 June, 16:00. Nitrate 14.0 mg/L. Temperature no data');
  });
  it('zooms by plus and minus', async () => {
    render(<Stack />);
    const handle = screen.getByRole('slider', { name: 'Time of the crosshair' });
    handle.focus();
    const span = () => Number(handle.getAttribute('aria-valuemax')) - Number(handle.getAttribute('aria-valuemin'));
    const before = span();
    await userEvent.keyboard('+');
    expect(span()).toBeCloseTo(before / 1.5, -1);
    await userEvent.keyboard('-');
    expect(span()).toBeCloseTo(before, -1);
  });
  it('shows each lane as a table', async () => {
    render(<Stack />);
    await userEvent.click(screen.getByRole('button', { name: 'Show as table: Nitrate' }));
    expect(screen.getByRole('table')).toHaveTextContent('2 Jun 2026, 00:0014.0');
    await userEvent.click(screen.getByRole('button', { name: 'Hide table: Nitrate' }));
    expect(screen.queryByRole('table')).toBeNull();
  });
});
