import type { Alarm } from '#shared/contract/alarms.ts';
import type { Device } from '#shared/contract/devices.ts';
import type { Head } from '#shared/contract/rig.ts';
import type { System, SystemStatus } from '#shared/contract/systems.ts';
import type { Run, Slot, Tape } from '#shared/contract/telemetry.ts';

/** Made-up resources for tests of screens: fine unless a test says otherwise. */
export const nowMs = Date.parse('2026-03-08T14:02:07Z');
const at = (offsetMs = 0) => new Date(nowMs + offsetMs).toISOString();

export const testId = (number: number) => `0190a000-0000-7000-8000-${String(number).padStart(12, '0')}`;

export function makeStatus(changed: Partial<SystemStatus> = {}): SystemStatus {
  return {
    worstPriority: null,
    openAlarms: 0,
    unacknowledgedAlarms: 0,
    latched: false,
    stoppedHeads: 0,
    unconfirmedStops: 0,
    carbonHeads: 1,
    offlineDevices: 0,
    heardAt: at(-12_000),
    givenTodayMl: 3.5,
    plannedTodayMl: 6,
    plannedSoFarMl: 3.5,
    nitrate: { at: at(-86_400_000), canonicalMgPerL: 12, below: false },
    phosphate: { at: at(-86_400_000), canonicalMgPerL: 0.05, below: false },
    ...changed,
  };
}

export function makeSystem(changed: Partial<System> = {}): System {
  return {
    id: testId(1),
    siteId: testId(900),
    siteName: 'Tern Lane',
    timeZone: 'Europe/Lisbon',
    role: 'owner',
    name: 'Front window',
    displayLitres: 360,
    sumpLitres: 100,
    displacementLitres: 40,
    netLitres: 420,
    status: makeStatus(),
    ...changed,
  };
}

export function makeHead(changed: Partial<Head> = {}): Head {
  return {
    id: testId(50),
    deviceId: testId(40),
    deviceName: 'Doser',
    head: 1,
    systemId: testId(1),
    kind: 'carbon',
    productId: null,
    reservoirId: null,
    mlPerSecond: 1.1,
    smallestMl: 0.1,
    schedule: null,
    stop: null,
    ...changed,
  };
}

export function makeDevice(headState: 'idle' | 'dosing' | 'stopped' = 'idle', changed: Partial<Device> = {}): Device {
  return {
    id: testId(40),
    systemId: testId(1),
    name: 'Doser',
    kind: 'pump',
    state: {
      deviceId: testId(40),
      online: true,
      heardAt: at(),
      changedAt: at(),
      scheduleVersion: 1,
      clockOffsetSeconds: 0,
      clockUnset: false,
      heads: [{ head: 1, state: headState, odometerMl: 1, odometerEpoch: 0 }],
    },
    publishedScheduleVersion: 1,
    rejects: 0,
    ...changed,
  };
}

export function makeRun(changed: Partial<Run> = {}): Run {
  return {
    id: 'run-1',
    deviceId: testId(40),
    headId: testId(50),
    head: 1,
    kind: 'carbon',
    beganAt: at(),
    endedAt: null,
    ml: 0.2,
    cause: 'schedule',
    dueAt: at(),
    interrupted: false,
    flags: [],
    ...changed,
  };
}

export function makeSlot(changed: Partial<Slot> = {}): Slot {
  return {
    headId: testId(50),
    deviceId: testId(40),
    head: 1,
    dueT: nowMs,
    ml: 0.5,
    mark: 'planned',
    deliveredMl: 0,
    runId: null,
    ...changed,
  };
}

export function makeTape(slots: Slot[]): Tape {
  return { fromT: nowMs - 3_600_000, toT: nowMs + 3_600_000, nowT: nowMs, slots, extras: [], givenMl: 3, plannedMl: 6, plannedSoFarMl: 3 };
}

export function makeAlarm(changed: Partial<Alarm> = {}): Alarm {
  return {
    id: testId(700),
    code: 'volume-hour',
    siteId: testId(900),
    systemId: testId(1),
    target: 'system',
    limitKind: 'hard',
    priority: 'urgent',
    state: 'unacknowledged',
    active: true,
    acknowledged: false,
    latched: true,
    shelvedUntil: null,
    raisedAt: at(),
    returnedAt: null,
    value: 3,
    limit: 2,
    unit: 'mL',
    evidence: {},
    taken: null,
    ...changed,
  };
}
