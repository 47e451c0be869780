import type { ReceiptPayload, RunPayload, SchedulePayload } from '#shared/mqtt/payloads.ts';

/** What a pump is built of; it does not change while it runs. */
export interface PumpSpec {
  /** Numbers of its heads, ascending. */
  heads: number[];
  /** Rate at which a head is taken to run before a schedule has told its calibrated rate, mL/s. */
  defaultMlPerSecond: number;
}

/** The pump's two clocks. `upMs` counts from power-on and never jumps; `nowMs` is the time of day, or `upMs` while it is not set. */
export interface PumpTime {
  nowMs: number;
  isSet: boolean;
  upMs: number;
}

/** One delivery, kept for the ceilings for 86,400 s. */
export interface Delivered {
  /** The last moment at which it gave anything. */
  atMs: number;
  ml: number;
  /** The power-on during which it was given: an unset clock cannot tell how old those of earlier ones are. */
  boot: number;
}

export interface CurrentRun {
  run: string;
  cause: RunPayload['cause'];
  /** What it is to give. */
  targetMl: number;
  mlPerSecond: number;
  begunMs: number;
  begunUpMs: number;
  /** Motor time and volume as of the last step. */
  onMs: number;
  ml: number;
  lastMs: number;
  lastReportUpMs: number;
  order?: string;
  scheduleVersion?: number;
  dueMs?: number;
}

export interface HeadState {
  head: number;
  stopped: boolean;
  odometerMl: number;
  current: CurrentRun | null;
  delivered: Delivered[];
  /** Slots that were started or refused, newest last: none of them ever runs again, whatever the clock does. */
  handledDueMs: number[];
}

/** All that a pump keeps through a power cut. */
export interface PumpState {
  /** Begins every run id of this memory, so that a pump that lost its memory does not use an id twice. */
  origin: string;
  runCount: number;
  boot: number;
  odometerEpoch: number;
  schedule: SchedulePayload | null;
  /** When the schedule came; null until the clock is set. Only slots due later run. */
  scheduleArrivedMs: number | null;
  heads: HeadState[];
  /** Newest last, bounded. */
  receipts: ReceiptPayload[];
  /** The clocks at the last step, to notice when the time of day was moved. */
  time: PumpTime;
}

export type PumpMessage = { word: 'run'; payload: RunPayload } | { word: 'receipt'; payload: ReceiptPayload };

/** A pump as it leaves the box. `odometerEpoch` must be higher than that of any memory it had before. */
export function newPump(spec: PumpSpec, origin: string, odometerEpoch: number): PumpState {
  return {
    origin,
    runCount: 0,
    boot: 0,
    odometerEpoch,
    schedule: null,
    scheduleArrivedMs: null,
    heads: spec.heads.map((head) => ({ head, stopped: false, odometerMl: 0, current: null, delivered: [], handledDueMs: [] })),
    receipts: [],
    time: { nowMs: 0, isSet: false, upMs: 0 },
  };
}
