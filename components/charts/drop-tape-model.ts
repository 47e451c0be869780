import type { ExtraDose, Slot, Tape } from '#shared/contract/telemetry.ts';
import { scrollBetweenLabels } from './tape-labels.ts';
import { timeScale } from './time-axis.ts';
import { timeTicks } from './time-ticks.ts';

export type TapeKind = Slot['mark'] | ExtraDose['kind'];

/** A portion or an extra dose, as it is told, drawn and opened. */
export interface TapeItem {
  readonly key: string;
  readonly kind: TapeKind;
  readonly tMs: number;
  /** 0 for what no slot planned. */
  readonly plannedMl: number;
  readonly givenMl: number;
  readonly deviceId: string | null;
  readonly head: number | null;
  readonly runId: string | null;
}

export interface TapeDrop {
  readonly item: TapeItem;
  /** Centre of the mark. */
  readonly x: number;
  readonly row: 'line' | 'above';
  /** How far a running drop is filled, 0 to 1. */
  readonly fillShare: number;
}

/** An hour's portions as one bar, where single drops would be too small: the plan as outline, what was given filled. */
export interface TapeBar {
  readonly key: string;
  readonly x: number;
  readonly width: number;
  /** Shares of the fullest hour of the line. */
  readonly plannedShare: number;
  readonly givenShare: number;
}

/** One head. */
export interface TapeLine {
  readonly key: string;
  readonly deviceId: string | null;
  readonly head: number | null;
  readonly drops: readonly TapeDrop[];
  readonly bars: readonly TapeBar[];
}

export interface TapeModel {
  readonly widthPx: number;
  readonly boxPx: number;
  readonly nowX: number;
  /** How far to scroll so that the now-line stands two thirds along; 0 where all is in sight. */
  readonly scrollX: number;
  readonly hours: readonly { readonly x: number; readonly label: string; readonly isDayStart: boolean }[];
  readonly lines: readonly TapeLine[];
}

export interface TapeFrame {
  readonly widthPx: number;
  readonly remPx: number;
  readonly zone: string;
  readonly nowMs: number;
}

const hourMs = 3_600_000;
const usualBoxPx = 14;
const leastBoxPx = 10;
const mostSlotsAsDrops = 24;
/** A tape that would have to be scrolled further is drawn smaller. */
const mostScreens = 2;
const nowShare = 2 / 3;
const edgePx = 10;
/** These are each a question to somebody, so that they are never merged into a bar. */
const singles: ReadonlySet<TapeKind> = new Set(['unplanned', 'missed', 'unheard']);

export function tapeItems(tape: Tape): TapeItem[] {
  const slots = tape.slots.map((slot) => ({
    key: `slot ${slot.deviceId} ${slot.head} ${slot.dueT}`,
    kind: slot.mark,
    tMs: slot.dueT,
    plannedMl: slot.ml,
    givenMl: slot.deliveredMl,
    deviceId: slot.deviceId,
    head: slot.head,
    runId: slot.runId,
  }));
  const extras = tape.extras.map((extra) => ({
    key: `${extra.kind} ${extra.sourceId}`,
    kind: extra.kind,
    tMs: extra.t,
    plannedMl: 0,
    givenMl: extra.ml,
    deviceId: extra.deviceId,
    head: extra.head,
    runId: extra.kind === 'unplanned' ? extra.sourceId : null,
  }));
  return [...slots, ...extras].sort((a, b) => a.tMs - b.tMs);
}

/** One line a head, in the order of device and number; what no head gave stands with the first. */
function itemsByLine(items: readonly TapeItem[]): { key: string; items: TapeItem[] }[] {
  const keyOf = (item: TapeItem) => (item.head === null ? null : `${item.deviceId ?? ''} ${item.head}`);
  const keys = [...new Set(items.map(keyOf).filter((key) => key !== null))].sort((a, b) => a.localeCompare(b, 'en', { numeric: true }));
  const first = keys[0] ?? 'hand';
  return (keys.length === 0 ? [first] : keys).map((key) => ({ key, items: items.filter((item) => (keyOf(item) ?? first) === key) }));
}

/** The least time between two slots of a line, which decides how wide an hour must be. */
function closestMs(items: readonly TapeItem[]): number {
  const times = items.filter((item) => item.plannedMl > 0).map((item) => item.tMs);
  return times.slice(1).reduce((least, tMs, i) => Math.min(least, tMs - (times[i] ?? 0)), Infinity);
}

/** The size of a box with which the fullest line fits, or null where only bars do. */
function boxFor(lines: readonly { items: TapeItem[] }[], spanMs: number, widthPx: number): number | null {
  const isCrowded = lines.some((line) => line.items.filter((item) => item.plannedMl > 0).length > mostSlotsAsDrops);
  if (isCrowded) return null;
  const closest = Math.min(...lines.map((line) => closestMs(line.items)));
  const needed = (boxPx: number) => ((boxPx + 1) * spanMs) / closest;
  return [usualBoxPx, leastBoxPx].find((boxPx) => needed(boxPx) <= mostScreens * widthPx) ?? null;
}

/** Extras go above the line where they would cover a portion; two above each other are pushed apart. */
function placeDrops(items: readonly TapeItem[], toX: (tMs: number) => number, boxPx: number): TapeDrop[] {
  const slotXs = items.filter((item) => item.plannedMl > 0).map((item) => toX(item.tMs));
  let lastAboveX = -Infinity;
  return items.map((item) => {
    const x = toX(item.tMs);
    const isExtra = item.plannedMl === 0;
    const covers = isExtra && slotXs.some((slotX) => Math.abs(slotX - x) < boxPx);
    const row = item.kind === 'hand' || covers ? 'above' : 'line';
    const placedX = row === 'above' ? Math.max(x, lastAboveX + boxPx + 1) : x;
    if (row === 'above') lastAboveX = placedX;
    const fillShare = item.plannedMl > 0 ? Math.min(1, item.givenMl / item.plannedMl) : 1;
    return { item, x: placedX, row, fillShare };
  });
}

function hourBars(items: readonly TapeItem[], tape: Tape, toX: (tMs: number) => number): TapeBar[] {
  const hours = new Map<number, { planned: number; given: number }>();
  for (const item of items) {
    if (item.plannedMl === 0) continue;
    const hour = Math.floor((item.tMs - tape.fromT) / hourMs);
    const known = hours.get(hour) ?? { planned: 0, given: 0 };
    hours.set(hour, { planned: known.planned + item.plannedMl, given: known.given + item.givenMl });
  }
  const fullest = Math.max(...[...hours.values()].flatMap(({ planned, given }) => [planned, given]), 0);
  return [...hours.entries()]
    .sort(([a], [b]) => a - b)
    .map(([hour, { planned, given }]) => {
      const x = toX(tape.fromT + hour * hourMs);
      return {
        key: String(hour),
        x: x + 1,
        width: toX(tape.fromT + (hour + 1) * hourMs) - x - 2,
        plannedShare: fullest === 0 ? 0 : planned / fullest,
        givenShare: fullest === 0 ? 0 : given / fullest,
      };
    });
}

/** A day of portions in pixels. */
export function tapeModel(tape: Tape, { widthPx, remPx, zone, nowMs }: TapeFrame): TapeModel {
  const lines = itemsByLine(tapeItems(tape));
  const spanMs = tape.toT - tape.fromT;
  const box = boxFor(lines, spanMs, widthPx);
  const closest = Math.min(...lines.map((line) => closestMs(line.items)));
  const neededPx = box === null || closest === Infinity ? 0 : ((box + 1) * spanMs) / closest + 2 * edgePx;
  const contentPx = Math.max(widthPx, Math.ceil(neededPx));
  const { toX } = timeScale({ fromMs: tape.fromT, toMs: tape.toT }, edgePx, contentPx - 2 * edgePx);
  const nowX = toX(Math.min(Math.max(nowMs, tape.fromT), tape.toT));
  const hours = timeTicks({ fromMs: tape.fromT, toMs: tape.toT }, zone, contentPx / (3.5 * remPx)).map((tick) => ({
    x: toX(tick.tMs),
    label: tick.strong ? '00:00' : tick.label,
    isDayStart: tick.strong,
  }));
  const scrollX = Math.min(Math.max(nowX - nowShare * widthPx, 0), contentPx - widthPx);
  return {
    widthPx: contentPx,
    boxPx: box ?? leastBoxPx,
    nowX,
    scrollX: scrollBetweenLabels(
      hours.map((hour) => hour.x),
      scrollX,
      remPx,
    ),
    hours,
    lines: lines.map((line) => {
      const drawn = box === null ? line.items.filter((item) => item.plannedMl === 0 || singles.has(item.kind)) : line.items;
      const [withHead] = line.items.filter((item) => item.head !== null);
      return {
        key: line.key,
        deviceId: withHead?.deviceId ?? null,
        head: withHead?.head ?? null,
        drops: placeDrops(drawn, toX, box ?? leastBoxPx),
        bars: box === null ? hourBars(line.items, tape, toX) : [],
      };
    }),
  };
}

/** The item nearest to a press at `x`, within a finger's reach of it. */
export function itemAt(model: TapeModel, lineKey: string, x: number, reachPx = 22): TapeItem | null {
  const drops = model.lines.find((line) => line.key === lineKey)?.drops ?? [];
  const nearest = drops.reduce<TapeDrop | null>(
    (best, drop) => (best === null || Math.abs(drop.x - x) < Math.abs(best.x - x) ? drop : best),
    null,
  );
  return nearest !== null && Math.abs(nearest.x - x) <= reachPx ? nearest.item : null;
}
