import { cleanup, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { Slot, Tape } from '#shared/contract/telemetry.ts';
import { DropMark } from '../../../components/charts/svg/drop-mark.tsx';
import { DropTape } from '../../../components/charts/drop-tape.tsx';
import { kindWords } from '../../../components/charts/drop-tape-words.ts';
import type { TapeItem, TapeKind } from '../../../components/charts/drop-tape-model.ts';

const hourMs = 3_600_000;
const fromT = Date.parse('2026-06-01T00:00:00Z');
const pump = '01900000-0000-7000-8000-000000000001';
const marks: Slot['mark'][] = ['delivered', 'missed', 'planned'];
const tape: Tape = {
  fromT,
  toT: fromT + 24 * hourMs,
  nowT: fromT + 10 * hourMs,
  slots: marks.map((mark, i) => ({
    headId: null,
    deviceId: pump,
    head: 1,
    dueT: fromT + (8 + 2 * i) * hourMs,
    ml: 0.5,
    mark,
    deliveredMl: mark === 'delivered' ? 0.5 : 0,
    runId: null,
  })),
  extras: [{ kind: 'hand', t: fromT + 9 * hourMs, ml: 2, deviceId: null, head: null, sourceId: 'hand' }],
  givenMl: 2.5,
  plannedMl: 1.5,
  plannedSoFarMl: 1,
};

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
});
afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
  vi.restoreAllMocks();
});

function show(onOpen?: (item: TapeItem) => void) {
  return render(<DropTape tape={tape} zone="UTC" nowMs={fromT + 10.5 * hourMs} headName={() => 'Doser, head 1'} onOpen={onOpen} />);
}

describe('DropTape', () => {
  it('is one image with a sentence for a screen reader', () => {
    show();
    expect(screen.getByRole('img', { name: "Today's portions: 1 of 3 portions given, 1 missed, 1 by hand, next 12:00." })).toBeVisible();
  });
  it('explains the marks that are on it, and no others', () => {
    show();
    const key = screen.getAllByRole('listitem').map((item) => item.textContent);
    expect(key).toEqual(['missed', 'by hand']);
  });
  it('has a table of the same portions, whose rows open', async () => {
    const onOpen = vi.fn();
    show(onOpen);
    await userEvent.click(screen.getByRole('button', { name: "Show as table: today's portions" }));
    const rows = within(screen.getByRole('table')).getAllByRole('row').slice(1);
    expect(rows.map((row) => row.textContent)).toEqual([
      '08:000.50 mL0.50 mLgiven',
      '09:00no2.0 mLby hand',
      '10:000.50 mL0.0 mLmissed',
      '12:000.50 mL0.0 mLplanned',
    ]);
    await userEvent.click(screen.getByRole('button', { name: 'Open 10:00: 0.50 mL planned, missed' }));
    expect(onOpen).toHaveBeenCalledWith(expect.objectContaining({ kind: 'missed' }));
  });
});

describe('DropMark', () => {
  it('has a shape of its own for every mark, colours aside', () => {
    const shapes = (Object.keys(kindWords) as TapeKind[]).map((kind) => {
      const { container } = render(
        <svg>
          <DropMark kind={kind} fillShare={0.5} />
        </svg>,
      );
      // One ink on one paper: what is left for who tells no hues apart.
      return container.innerHTML
        .replaceAll('var(--ground)', 'paper')
        .replace(/var\(--[a-z-]+\)/g, 'ink')
        .replace(/(id|clip-path)="[^"]*"/g, '');
    });
    expect(new Set(shapes).size).toBe(shapes.length);
  });
});
