import { describe, expect, it } from 'vitest';
import type { ExtraDose, Slot, Tape } from '#shared/contract/telemetry.ts';
import { itemAt, tapeItems, tapeModel, type TapeFrame, type TapeKind } from '../../../components/charts/drop-tape-model.ts';
import { itemWords, kindWords, tapeSentence } from '../../../components/charts/drop-tape-words.ts';

const hourMs = 3_600_000;
const fromT = Date.parse('2026-06-01T00:00:00Z');
const at = (hours: number) => fromT + hours * hourMs;
const pump = '01900000-0000-7000-8000-000000000001';

const slot = (hours: number, mark: Slot['mark'], rest: Partial<Slot> = {}): Slot => ({
  headId: null,
  deviceId: pump,
  head: 1,
  dueT: at(hours),
  ml: 0.5,
  mark,
  deliveredMl: mark === 'delivered' ? 0.5 : 0,
  runId: null,
  ...rest,
});
const extra = (kind: ExtraDose['kind'], hours: number, rest: Partial<ExtraDose> = {}): ExtraDose => ({
  kind,
  t: at(hours),
  ml: 2,
  deviceId: kind === 'hand' ? null : pump,
  head: kind === 'hand' ? null : 1,
  sourceId: `${kind} ${hours}`,
  ...rest,
});
const tapeOf = (slots: Slot[], extras: ExtraDose[] = []): Tape => ({
  fromT,
  toT: at(24),
  nowT: at(14),
  slots,
  extras,
  givenMl: 0,
  plannedMl: 0,
  plannedSoFarMl: 0,
});
const frame: TapeFrame = { widthPx: 358, remPx: 16, zone: 'UTC', nowMs: at(14) };
const hourly = (count: number, startHour = 8) =>
  Array.from({ length: count }, (_, i) => slot(startHour + i, startHour + i < 14 ? 'delivered' : 'planned'));

describe('tapeModel', () => {
  it('draws one drop a portion in boxes of 14 that do not touch', () => {
    const model = tapeModel(tapeOf(hourly(12)), frame);
    expect(model.boxPx).toBe(14);
    const xs = model.lines[0]?.drops.map((drop) => drop.x) ?? [];
    expect(xs).toHaveLength(12);
    expect(xs.slice(1).every((x, i) => x - (xs[i] ?? 0) >= 14)).toBe(true);
  });
  it('shrinks the boxes, to no less than 10, before it goes over to bars', () => {
    const every = (minutes: number, count: number) => Array.from({ length: count }, (_, i) => slot(8 + (i * minutes) / 60, 'planned'));
    expect(tapeModel(tapeOf(every(31, 20)), frame).boxPx).toBe(14);
    const closer = tapeModel(tapeOf(every(24, 20)), frame);
    expect(closer.boxPx).toBe(10);
    expect(closer.lines[0]?.bars).toEqual([]);
    expect(tapeModel(tapeOf(every(10, 20)), frame).lines[0]?.bars.length).toBe(4);
  });
  it('draws a bar an hour above 24 slots a day, with what is a question kept single', () => {
    const marks: Partial<Record<number, Slot['mark']>> = { 3: 'missed', 7: 'unheard' };
    const slots = Array.from({ length: 48 }, (_, i) => slot(i / 2, marks[i] ?? (i < 28 ? 'delivered' : 'planned')));
    const [line] = tapeModel(tapeOf(slots, [extra('unplanned', 10.2), extra('hand', 11)]), { ...frame, widthPx: 1200 }).lines;
    expect(line?.bars).toHaveLength(24);
    expect(line?.drops.map((drop) => drop.item.kind)).toEqual(['missed', 'unheard', 'unplanned', 'hand']);
    expect(line?.bars[0]).toMatchObject({ plannedShare: 1, givenShare: 1 });
    expect(line?.bars[1]).toMatchObject({ plannedShare: 1, givenShare: 0.5 });
    expect(line?.bars[20]).toMatchObject({ plannedShare: 1, givenShare: 0 });
  });
  it('puts the now-line about two thirds along where the tape is wider than the screen', () => {
    const slots = Array.from({ length: 24 }, (_, i) => slot(6 + i / 2, 'planned'));
    const model = tapeModel(tapeOf(slots), frame);
    expect(model.widthPx).toBeGreaterThan(frame.widthPx);
    // Not to the pixel: no hour's text is cut at the left edge.
    const shareOfScreen = (model.nowX - model.scrollX) / frame.widthPx;
    expect(shareOfScreen).toBeGreaterThanOrEqual(2 / 3 - 1e-6);
    expect(shareOfScreen).toBeLessThan(0.8);
    expect(model.hours.every((hour) => Math.abs(hour.x - model.scrollX) > 17)).toBe(true);
  });
  it('does not scroll past either end of the day', () => {
    const slots = Array.from({ length: 24 }, (_, i) => slot(6 + i / 2, 'planned'));
    expect(tapeModel(tapeOf(slots), { ...frame, nowMs: at(1) }).scrollX).toBe(0);
    const evening = tapeModel(tapeOf(slots), { ...frame, nowMs: at(23.9) });
    expect(evening.scrollX).toBeLessThanOrEqual(evening.widthPx - frame.widthPx);
  });
  it('gives each head a line of its own', () => {
    const slots = [slot(9, 'delivered'), slot(9, 'delivered', { head: 10 }), slot(10, 'planned', { head: 2 })];
    const model = tapeModel(tapeOf(slots, [extra('hand', 12)]), frame);
    expect(model.lines.map((line) => line.head)).toEqual([1, 2, 10]);
    expect(model.lines[0]?.drops.map((drop) => drop.item.kind)).toEqual(['delivered', 'hand']);
  });
  it('puts a hand dose above the line, and an unplanned run only where it would cover a portion', () => {
    const model = tapeModel(tapeOf(hourly(3), [extra('hand', 8), extra('unplanned', 9.1), extra('unplanned', 16)]), frame);
    const rows = model.lines[0]?.drops.filter((drop) => drop.item.plannedMl === 0).map((drop) => [drop.item.kind, drop.row]);
    expect(rows).toEqual([
      ['hand', 'above'],
      ['unplanned', 'above'],
      ['unplanned', 'line'],
    ]);
  });
  it('pushes hand doses of the same minute apart', () => {
    const model = tapeModel(tapeOf([], [extra('hand', 8), extra('hand', 8.01)]), frame);
    const [first, second] = model.lines[0]?.drops ?? [];
    expect((second?.x ?? 0) - (first?.x ?? 0)).toBeGreaterThanOrEqual(10);
  });
  it('fills a running drop as far as it has given, never over', () => {
    const model = tapeModel(tapeOf([slot(13, 'running', { deliveredMl: 0.2 }), slot(14, 'running', { deliveredMl: 9 })]), frame);
    expect(model.lines[0]?.drops.map((drop) => drop.fillShare)).toEqual([0.4, 1]);
  });
  it('stands with nothing planned and nothing given', () => {
    const model = tapeModel(tapeOf([]), frame);
    expect(model.lines).toHaveLength(1);
    expect(model.lines[0]?.drops).toEqual([]);
    expect(model.widthPx).toBe(frame.widthPx);
  });
  it('lays a day of 25 hours out whole', () => {
    const dayStart = Date.parse('2026-10-24T23:00:00Z');
    const long: Tape = { ...tapeOf([]), fromT: dayStart, toT: Date.parse('2026-10-26T00:00:00Z') };
    const model = tapeModel(long, { ...frame, zone: 'Europe/Lisbon', nowMs: dayStart + 13 * hourMs, widthPx: 900 });
    expect(model.hours[0]).toMatchObject({ label: '00:00', isDayStart: true });
    expect(model.nowX).toBeCloseTo(10 + (880 * 13) / 25, 6);
  });
});

describe('itemAt', () => {
  const model = tapeModel(tapeOf(hourly(12)), frame);
  const line = model.lines[0];

  it('finds the portion under a finger, and none far from all', () => {
    expect(itemAt(model, line?.key ?? '', (line?.drops[3]?.x ?? 0) + 3)?.tMs).toBe(at(11));
    expect(itemAt(model, line?.key ?? '', 15)).toBeNull();
    expect(itemAt(model, 'another line', 100)).toBeNull();
  });
});

describe('tapeSentence', () => {
  it('counts what was given, what differs, and says when the next is due', () => {
    const slots = [...hourly(12).slice(0, 7), slot(14.2, 'planned')].map((one, i) =>
      i === 6 ? { ...one, mark: 'unheard' as const } : one,
    );
    expect(tapeSentence(tapeOf(slots), 'UTC', at(14))).toBe('6 of 8 portions given, 1 unheard, next 14:12');
  });
  it('names every mark once', () => {
    const marks: Slot['mark'][] = ['planned', 'running', 'delivered', 'partial', 'unheard', 'missed', 'held', 'interlocked'];
    const tape = tapeOf(
      marks.map((mark, i) => slot(i, mark)),
      [extra('hand', 9), extra('unplanned', 10)],
    );
    expect(tapeSentence(tape, 'UTC', at(14))).toBe(
      '1 of 8 portions given, 1 running now, 1 in part, 1 unheard, 1 missed, 1 held, 1 stopped by an alarm, 1 unplanned, 1 by hand, no more today',
    );
  });
  it('says that nothing is planned', () => {
    expect(tapeSentence(tapeOf([]), 'UTC', at(14))).toBe('No portion is planned');
    expect(tapeSentence(tapeOf([], [extra('hand', 9)]), 'UTC', at(14))).toBe('No portion is planned, 1 by hand');
  });
  it("tells times in the site's zone", () => {
    expect(tapeSentence(tapeOf([slot(16, 'planned')]), 'Asia/Kolkata', at(14))).toBe('0 of 1 portion given, next 21:30');
  });
});

describe('itemWords', () => {
  it('says what was planned and what came of it', () => {
    const words = tapeItems(tapeOf([slot(9, 'delivered'), slot(10, 'partial', { deliveredMl: 0.3 })], [extra('hand', 11)])).map((item) =>
      itemWords(item, 'UTC'),
    );
    expect(words).toEqual([
      '09:00: 0.50 mL planned, given',
      '10:00: 0.50 mL planned, given in part, 0.30 mL so far',
      '11:00: 2.0 mL by hand',
    ]);
  });
  it('has a word of its own for each mark', () => {
    const kinds = Object.keys(kindWords) as TapeKind[];
    expect(new Set(kinds.map((kind) => kindWords[kind])).size).toBe(kinds.length);
  });
});
