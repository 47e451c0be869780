/**
 * How a planned portion went. `held` and `interlocked`: a person or an alarm keeps the head stopped and the pump has said so,
 * or the pump's ceiling refused it. `unheard`: nobody knows yet, also under a stop that the pump has not proved.
 */
export type SlotMark = 'planned' | 'running' | 'delivered' | 'partial' | 'unheard' | 'missed' | 'held' | 'interlocked';

export interface TapeSlot {
  deviceId: string;
  head: number;
  dueMs: number;
  ml: number;
  /** False when the schedule kept the head stopped. */
  enabled: boolean;
  maxMlPerHour: number;
  maxMlPerDay: number;
}

export interface TapeRun {
  id: string;
  deviceId: string;
  head: number;
  beganMs: number;
  endedMs: number | null;
  ml: number;
  cause: 'schedule' | 'order' | 'button' | 'prime' | 'calibration';
  dueMs: number | null;
}

export interface TapeStop {
  deviceId: string;
  head: number;
  cause: 'person' | 'interlock';
  stoppedMs: number;
  resumedMs: number | null;
  /** The pump itself has said that the head is stopped, or that it runs a schedule in which the head is off. */
  isProved: boolean;
}

/** What is known of a pump's presence now. */
export interface TapePump {
  deviceId: string;
  isOnline: boolean;
  heardMs: number;
  /** When it came or went last. */
  changedMs: number;
}

export interface TapeFacts<Slot extends TapeSlot> {
  /** Ascending by due time, those of stopped heads included. */
  slots: readonly Slot[];
  /** Those of the 24 h before the first slot too, which the ceilings of the pump count. */
  runs: readonly TapeRun[];
  stops: readonly TapeStop[];
  pumps: readonly TapePump[];
  nowMs: number;
}

export interface MarkedSlot<Slot extends TapeSlot> {
  slot: Slot;
  mark: SlotMark;
  run: TapeRun | null;
}

export interface DropTape<Slot extends TapeSlot> {
  slots: MarkedSlot<Slot>[];
  /** Runs that no slot planned, ascending. */
  unplanned: TapeRun[];
}

/** A slot starts within this of its due time, or is skipped for good. */
const STARTS_WITHIN_MS = 60_000;
/** How long the report of a run may take to arrive before its slot counts as missed. */
const REPORT_GRACE_MS = 30_000;
/** What a pump buffered while it was away arrives within this of its return. */
const UPLOAD_GRACE_MS = 60_000;
/** A portion short by more than a tenth is partial: this project's own choice. */
const WHOLE_FROM_SHARE = 0.9;
const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;
/** A millionth of a millilitre: the dust of binary fractions. */
const HAIR_ML = 1e-6;

const isSameHead = (one: { deviceId: string; head: number }, other: { deviceId: string; head: number }) =>
  one.deviceId === other.deviceId && one.head === other.head;

/**
 * Lays what pumps delivered over what was planned. A scheduled run belongs to the slot whose due time it names, or to the
 * nearest of its head within 60 s; each slot takes one run, the earliest; what is left over was not planned.
 *
 * Example: a slot due at 10:00 without a run is `planned` until 10:01:30, then `missed` if the pump was heard since
 * 10:01, else `unheard`.
 */
export function dropTape<Slot extends TapeSlot>(facts: TapeFacts<Slot>): DropTape<Slot> {
  const { taken, unplanned } = matchRuns(facts.slots, facts.runs);
  const slots = facts.slots.flatMap((slot, index) => {
    const run = taken.get(index) ?? null;
    const mark = run === null ? markWithoutRun(slot, facts) : markOfRun(slot, run, facts);
    return mark === null ? [] : [{ slot, mark, run }];
  });
  return { slots, unplanned };
}

function matchRuns(slots: readonly TapeSlot[], runs: readonly TapeRun[]): { taken: Map<number, TapeRun>; unplanned: TapeRun[] } {
  const taken = new Map<number, TapeRun>();
  const unplanned: TapeRun[] = [];
  const ascending = [...runs].sort((one, other) => one.beganMs - other.beganMs);

  const unmatched = ascending.filter((run) => {
    if (run.cause !== 'schedule' || run.dueMs === null) return true;
    const index = slots.findIndex((slot) => isSameHead(slot, run) && slot.dueMs === run.dueMs);
    if (index === -1 || taken.has(index)) return true;
    taken.set(index, run);
    return false;
  });
  for (const run of unmatched) {
    const index = run.cause === 'schedule' ? nearestFreeSlot(slots, run, taken) : null;
    if (index === null) unplanned.push(run);
    else taken.set(index, run);
  }
  return { taken, unplanned };
}

function nearestFreeSlot(slots: readonly TapeSlot[], run: TapeRun, taken: ReadonlyMap<number, TapeRun>): number | null {
  // The same slot twice is a fault of the pump, and not the delivery of its neighbour.
  if (slots.some((slot) => isSameHead(slot, run) && slot.dueMs === run.dueMs)) return null;
  const atMs = run.dueMs ?? run.beganMs;
  let nearest: { index: number; apartMs: number } | null = null;
  for (const [index, slot] of slots.entries()) {
    const apartMs = Math.abs(slot.dueMs - atMs);
    if (!isSameHead(slot, run) || taken.has(index) || apartMs > STARTS_WITHIN_MS) continue;
    if (nearest === null || apartMs < nearest.apartMs) nearest = { index, apartMs };
  }
  return nearest?.index ?? null;
}

function markOfRun(slot: TapeSlot, run: TapeRun, { pumps }: TapeFacts<TapeSlot>): SlotMark {
  if (run.endedMs === null) {
    const pump = pumps.find((one) => one.deviceId === run.deviceId);
    return pump?.isOnline === true ? 'running' : 'unheard';
  }
  if (run.ml <= 0) return 'missed';
  return run.ml + HAIR_ML >= WHOLE_FROM_SHARE * slot.ml ? 'delivered' : 'partial';
}

/** Null for a slot of a disabled head that no stop accounts for: it was not planned. */
function markWithoutRun(slot: TapeSlot, { runs, stops, pumps, nowMs }: TapeFacts<TapeSlot>): SlotMark | null {
  const latestStartMs = slot.dueMs + STARTS_WITHIN_MS;
  // One that came while the slot might still have started kept it from starting.
  const stop = stops.find(
    (one) => isSameHead(one, slot) && one.stoppedMs <= latestStartMs && (one.resumedMs === null || slot.dueMs <= one.resumedMs),
  );
  const pump = pumps.find((one) => one.deviceId === slot.deviceId);
  if (stop !== undefined) {
    if (!isKnownToHold(stop, pump, latestStartMs)) return 'unheard';
    return stop.cause === 'interlock' ? 'interlocked' : 'held';
  }
  if (!slot.enabled) return null;
  if (nowMs <= latestStartMs + REPORT_GRACE_MS) return 'planned';
  if (pump === undefined || pump.heardMs < latestStartMs) return 'unheard';
  const isUploading = pump.isOnline && slot.dueMs < pump.changedMs && nowMs - pump.changedMs < UPLOAD_GRACE_MS;
  if (isUploading) return 'unheard';
  return isRefusedByCeiling(slot, runs) ? 'held' : 'missed';
}

/** A pump that resumed has been heard since; before, only its own word and its presence tell that nothing was given. */
function isKnownToHold(stop: TapeStop, pump: TapePump | undefined, latestStartMs: number): boolean {
  if (stop.resumedMs !== null) return true;
  return stop.isProved && pump !== undefined && (pump.isOnline || pump.heardMs >= latestStartMs);
}

/** After a step down the portions of before still fill the pump's hour or day, and it refuses until they have aged out. */
function isRefusedByCeiling(slot: TapeSlot, runs: readonly TapeRun[]): boolean {
  const givenMl = (windowMs: number) =>
    runs
      .filter(
        (run) => isSameHead(run, slot) && run.cause !== 'calibration' && run.beganMs <= slot.dueMs && run.beganMs > slot.dueMs - windowMs,
      )
      .reduce((sum, run) => sum + run.ml, 0);
  return givenMl(HOUR_MS) + slot.ml > slot.maxMlPerHour + HAIR_ML || givenMl(DAY_MS) + slot.ml > slot.maxMlPerDay + HAIR_ML;
}
