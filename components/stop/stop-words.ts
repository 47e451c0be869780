import type { OrderOutcome } from '#shared/contract/control.ts';
import type { Device } from '#shared/contract/devices.ts';
import type { Head } from '#shared/contract/rig.ts';
import { pullThePlug, refusalWords } from '../../lib/codes/order-words.ts';
import { formatClockWithSeconds, formatNear, inZone } from '../../lib/format/time.ts';

/** `Doser, head 1` */
export function headName(head: Pick<Head, 'deviceName' | 'head'>): string {
  return `${head.deviceName}, head ${head.head}`;
}

export const carbonHeads = (heads: readonly Head[]) => heads.filter((head) => head.kind === 'carbon');

/** When the pump itself last said that this head is stopped; null when it has not, or the head moved on since. */
export function saidStoppedAt(devices: readonly Device[], deviceId: string, head: number): string | null {
  const state = devices.find((device) => device.id === deviceId)?.state;
  const reported = state?.heads.find((other) => other.head === head);
  return state?.online === true && reported?.state === 'stopped' ? state.heardAt : null;
}

export interface StopLine {
  orderId: string;
  head: string;
  sentence: string;
  /** False while somebody may have to pull the plug. */
  isStopped: boolean;
}

/**
 * What happened at the pump for one order of a stop: the pump's own receipt or its live state, never the wish. `waiting` and
 * `no-answer` turn into stopped when the pump's state says so later.
 */
export function stopLine(order: OrderOutcome, heads: readonly Head[], devices: readonly Device[], timeZone: string): StopLine {
  const known = heads.find((head) => head.deviceId === order.deviceId && head.head === order.head);
  const base = { orderId: order.id, head: known === undefined ? `Head ${order.head}` : headName(known) };
  const saidAt = saidStoppedAt(devices, order.deviceId, order.head);
  const stoppedAt = order.outcome === 'done' ? order.at : saidAt === null ? null : (known?.stop?.confirmedAt ?? saidAt);
  if (order.outcome === 'done' || stoppedAt !== null) {
    const at = stoppedAt === null ? '' : `, ${formatClockWithSeconds(stoppedAt, timeZone)}`;
    return { ...base, sentence: `Stopped at the pump${at}`, isStopped: true };
  }
  switch (order.outcome) {
    case 'waiting':
      return { ...base, sentence: `The pump is away: it gets the stop when it is back. ${pullThePlug}`, isStopped: false };
    case 'refused':
      return { ...base, sentence: `The pump refused: ${refusalWords(order.why)}. ${pullThePlug}`, isStopped: false };
    case 'expired':
    case 'no-answer':
      return { ...base, sentence: `No answer. ${pullThePlug}`, isStopped: false };
  }
}

/** The same for a resume. */
export function resumeLine(order: OrderOutcome, heads: readonly Head[]): StopLine {
  const known = heads.find((head) => head.deviceId === order.deviceId && head.head === order.head);
  const base = { orderId: order.id, head: known === undefined ? `Head ${order.head}` : headName(known) };
  switch (order.outcome) {
    case 'done':
      return { ...base, sentence: 'Doses again from its next portion', isStopped: false };
    case 'refused':
      return { ...base, sentence: `The pump refused: ${refusalWords(order.why)}. It stays stopped`, isStopped: true };
    case 'waiting':
    case 'expired':
    case 'no-answer':
      return { ...base, sentence: 'No answer: it stays stopped. Try again when the pump is heard', isStopped: true };
  }
}

/** `14:02:07` today: a stop is told to the second while it is fresh; else as any other time near now. */
function stopClock(at: string, timeZone: string, nowMs: number): string {
  const isToday = inZone(at, timeZone).hasSame(inZone(nowMs, timeZone), 'day');
  return isToday ? formatClockWithSeconds(at, timeZone) : formatNear(at, timeZone, nowMs);
}

/** What a stopped head's own pump said of it; the wish alone is never said as a stop. Null for a head that is not stopped. */
export function stoppedSentence({ stop }: Pick<Head, 'stop'>, timeZone: string, nowMs: number): string | null {
  if (stop === null) return null;
  if (stop.confirmedAt !== null) return `Stopped at the pump, ${stopClock(stop.confirmedAt, timeZone, nowMs)}`;
  return `Asked at ${formatNear(stop.at, timeZone, nowMs)}, no answer yet. ${pullThePlug}`;
}

export interface StopState {
  /** Carbon heads kept stopped, and those of them whose pump has not said so. */
  stopped: Head[];
  unconfirmed: Head[];
}

/** Which carbon heads are stopped. Whether a latch still holds them is the system's to say: a reset releases it before the resume. */
export function stopState(heads: readonly Head[]): StopState {
  const stopped = carbonHeads(heads).filter((head) => head.stop !== null);
  return { stopped, unconfirmed: stopped.filter((head) => head.stop?.confirmedAt === null) };
}

/** One line a stopped head, those without an answer first; named where the system has more than one. */
export function stopLines(
  heads: readonly Head[],
  timeZone: string,
  nowMs: number,
): { headId: string; words: string; isConfirmed: boolean }[] {
  const { stopped, unconfirmed } = stopState(heads);
  const isOne = carbonHeads(heads).length === 1;
  return [...unconfirmed, ...stopped.filter((head) => !unconfirmed.includes(head))].map((head) => {
    const sentence = stoppedSentence(head, timeZone, nowMs) ?? '';
    return { headId: head.id, words: isOne ? sentence : `${headName(head)}: ${sentence}`, isConfirmed: head.stop?.confirmedAt !== null };
  });
}
