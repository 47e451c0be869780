import type { OrderOutcome } from '#shared/contract/control.ts';
import type { Device } from '#shared/contract/devices.ts';
import type { Head } from '#shared/contract/rig.ts';
import { refusalWords } from '../../lib/codes/order-words.ts';
import { formatClockWithSeconds } from '../../lib/format/time.ts';

export const pullThePlug = "Pull the pump's plug; dry hands first.";

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
  const stoppedAt = order.outcome === 'done' ? order.at : saidStoppedAt(devices, order.deviceId, order.head);
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

export interface StopState {
  /** Carbon heads kept stopped, and since when the longest of them. */
  stopped: Head[];
  running: Head[];
  since: string | null;
}

/** Which carbon heads are stopped. Whether a latch still holds them is the system's to say: a reset releases it before the resume. */
export function stopState(heads: readonly Head[]): StopState {
  const carbon = carbonHeads(heads);
  const stopped = carbon.filter((head) => head.stop !== null);
  const times = stopped.map((head) => head.stop?.at ?? '').sort();
  return {
    stopped,
    running: carbon.filter((head) => head.stop === null),
    since: times[0] ?? null,
  };
}
