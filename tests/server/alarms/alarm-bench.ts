import { randomUUID } from 'node:crypto';
import { type Alarms, createAlarms } from '../../../server/alarms/create-alarms.ts';
import type { AlarmRow } from '../../../server/alarms/alarm-row.ts';
import type { InterlockStop, StopPort } from '../../../server/alarms/stop-port.ts';
import { markDirty } from '../../../server/changes/record-change.ts';
import { query } from '../../../server/db/open.ts';
import type { NewRow } from '../../../server/db/schema.ts';
import type { Transaction } from '../../../server/db/writer.ts';
import { runSourceId } from '../../../server/doses/run-source-id.ts';
import { type ManualClock, manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';

export const MINUTE = 60_000;
export const HOUR = 60 * MINUTE;
export const DAY = 24 * HOUR;

/** 12 portions of 0.5 mL from 00:00 on, every two hours. */
const twoHourly = Array.from({ length: 12 }, (_, index) => index * 120);

export interface Bench {
  opened: TestCore;
  clock: ManualClock;
  alarms: Alarms;
  port: StopPort & { stops: InterlockStop[]; dispatched: number };
  siteId: string;
  systemId: string;
  pumpId: string;
  headId: string;
  userId: string;
  /** Publishes a schedule for a pump. */
  schedule(options?: ScheduleOptions): Promise<number>;
  addHead(head: number): Promise<string>;
  /** A whole run as ingest would leave it. */
  run(run: Partial<NewRow<'run'>> & { ml: number }): Promise<string>;
  handDose(ml: number, atMs?: number): Promise<void>;
  /** Gives every planned portion of the stretch on time. */
  giveOnTime(fromMs: number, toMs: number, receivedMs?: number): Promise<void>;
  /** What ingest leaves when the pump comes or goes. */
  hear(online: boolean): Promise<void>;
  open(): Promise<AlarmRow[]>;
  all(): Promise<AlarmRow[]>;
  commit<Result>(unit: (tx: Transaction) => Result): Promise<Result>;
  /** Moves the clock in seconds and lets the evaluator tick each time. */
  pass(ms: number, stepMs?: number): Promise<void>;
  restart(): Promise<void>;
  close(): Promise<void>;
}

interface ScheduleOptions {
  slotMl?: number;
  slotsUtcMin?: number[];
  enabled?: boolean;
  fromMs?: number;
  head?: number;
}

/** A system of 420 L with a label of 2 mL per 100 L and day (8.4 mL/d), one pump and one carbon head. */
export async function openBench(startMs = Date.parse('2026-03-10T12:30:00Z')): Promise<Bench> {
  const clock = manualClock(startMs);
  const opened = await openTestCore(clock);
  const [siteId, systemId, pumpId, headId, userId, productId] = [
    randomUUID(),
    randomUUID(),
    randomUUID(),
    randomUUID(),
    randomUUID(),
    randomUUID(),
  ];
  const { writer, reader } = opened.core;
  const longAgoMs = startMs - 60 * DAY;
  let version = 1;

  const port: Bench['port'] = {
    stops: [],
    dispatched: 0,
    stopHeads(tx, stop) {
      port.stops.push(stop);
      const already = tx.first(query.selectFrom('headStop').select('id').where('deviceId', '=', pumpId).where('resumedAtMs', 'is', null));
      if (already !== undefined) return;
      tx.run(query.insertInto('headStop').values(stopRow({ cause: 'interlock', alarmId: stop.alarmId, stoppedAtMs: stop.nowMs })));
    },
    dispatch: () => void port.dispatched++,
  };

  const stopRow = (row: Partial<NewRow<'headStop'>>): NewRow<'headStop'> => ({
    ...{ id: randomUUID(), siteId, systemId, deviceId: pumpId, head: 1, cause: 'person', alarmId: null, stoppedAtMs: clock.nowMs() },
    ...{ actorKind: 'system', actorId: 'steadfall', resumedAtMs: null, resumedBy: null },
    ...row,
  });

  const assignment = (id: string): NewRow<'headAssignment'> => ({
    ...{ id: randomUUID(), siteId, headId: id, systemId, kind: 'carbon', productId, reservoirId: null },
    ...{ mlPerSecond: 1, smallestMl: 0.1, fromMs: longAgoMs, toMs: null, actorId: userId },
  });

  await writer.commit((tx) => {
    tx.run(query.insertInto('site').values({ id: siteId, name: 'Bench', timeZone: 'Europe/Lisbon', createdAtMs: 0 }));
    tx.run(
      query.insertInto('user').values({ id: userId, email: 'keeper@bench.example', name: 'Keeper', passwordHash: '', createdAtMs: 0 }),
    );
    tx.run(query.insertInto('membership').values({ siteId, userId, role: 'keeper', createdAtMs: 0 }));
    const volumes = { displayLitres: 380, sumpLitres: 80, displacementLitres: 40 };
    tx.run(query.insertInto('system').values({ id: systemId, siteId, name: 'Tank', ...volumes, createdAtMs: 0 }));
    tx.run(
      query
        .insertInto('device')
        .values({ id: pumpId, siteId, systemId, name: 'Pump', kind: 'pump', secretHash: '', credentialVersion: 1, createdAtMs: 0 }),
    );
    tx.run(query.insertInto('product').values({ id: productId, siteId, name: 'Blend', form: 'liquid', createdAtMs: 0 }));
    tx.run(
      query.insertInto('productRevision').values({
        ...{ id: randomUUID(), productId, siteId, composition: '[]', labelMl: 2, labelMaxMl: null, labelPerLitres: 100, labelPerDays: 1 },
        ...{ oxygenDemandMgPerMl: null, carbonMgPerMl: null, fromMs: longAgoMs, actorId: userId },
      }),
    );
    tx.run(query.insertInto('head').values({ id: headId, siteId, deviceId: pumpId, head: 1, createdAtMs: 0 }));
    tx.run(query.insertInto('headAssignment').values(assignment(headId)));
  });

  const bench: Bench = {
    ...{ opened, clock, port, siteId, systemId, pumpId, headId, userId },
    alarms: createAlarms(opened.core, port),
    async schedule({ slotMl = 0.5, slotsUtcMin = twoHourly, enabled = true, fromMs = longAgoMs, head = 1 } = {}) {
      const mine = version++;
      const heads = [
        {
          head,
          enabled,
          slotMl,
          slotsUtcMin,
          mlPerSecond: 1,
          maxMlPerRun: 1.2 * slotMl,
          maxMlPerHour: 2 * slotMl,
          maxMlPerDay: 13 * slotMl,
        },
      ];
      await writer.commit((tx) =>
        tx.run(
          query.insertInto('scheduleVersion').values({
            ...{ deviceId: pumpId, version: mine, siteId, body: JSON.stringify({ version: mine, heads }), fromMs, cause: 'test' },
            ...{ actorKind: 'user', actorId: userId, publishedAtMs: fromMs },
          }),
        ),
      );
      return mine;
    },
    async addHead(head) {
      const id = randomUUID();
      await writer.commit((tx) => {
        tx.run(query.insertInto('head').values({ id, siteId, deviceId: pumpId, head, createdAtMs: 0 }));
        tx.run(query.insertInto('headAssignment').values(assignment(id)));
      });
      return id;
    },
    async run(given) {
      const row = runRow(given);
      await writer.commit((tx) => writeRun(tx, row));
      await bench.alarms.settled();
      return row.run;
    },
    async handDose(ml, atMs = clock.nowMs()) {
      await writer.commit((tx) => {
        addToLedger(tx, { sourceKind: 'hand', sourceId: randomUUID(), atMs, deltaMl: ml, receivedMs: clock.nowMs(), headId: null });
        markDirty(tx, systemId, clock.nowMs());
      });
      await bench.alarms.settled();
    },
    async giveOnTime(fromMs, toMs, receivedMs) {
      const rows: NewRow<'run'>[] = [];
      for (let dayMs = Math.floor(fromMs / DAY) * DAY; dayMs <= toMs; dayMs += DAY) {
        for (const minute of twoHourly) {
          const dueMs = dayMs + minute * MINUTE;
          if (dueMs <= fromMs || dueMs > toMs) continue;
          const begunMs = dueMs + 5_000;
          const times = {
            dueMs,
            begunMs,
            endedMs: begunMs + 500,
            begunReceivedMs: receivedMs ?? begunMs,
            receivedMs: receivedMs ?? begunMs,
          };
          rows.push(runRow({ ml: 0.5, cause: 'schedule', scheduleVersion: 1, ...times }));
        }
      }
      await writer.commit((tx) => rows.forEach((row) => writeRun(tx, row)));
      await bench.alarms.settled();
    },
    async hear(online) {
      const nowMs = clock.nowMs();
      const known = await reader.selectFrom('deviceState').selectAll().where('deviceId', '=', pumpId).executeTakeFirst();
      const isSame = known !== undefined && known.online === (online ? 1 : 0);
      const state = { online: online ? 1 : 0, heardAtMs: nowMs, changedAtMs: isSame ? known.changedAtMs : nowMs, scheduleVersion: 1 };
      await writer.commit((tx) => {
        tx.run(
          query
            .insertInto('deviceState')
            .values({ deviceId: pumpId, heads: '[]', clockOffsetMs: 0, clockUnset: 0, ...state })
            .onConflict((conflict) => conflict.column('deviceId').doUpdateSet(state)),
        );
        markDirty(tx, systemId, nowMs);
      });
      await bench.alarms.settled();
    },
    open: () => reader.selectFrom('alarm').selectAll().where('closedAtMs', 'is', null).orderBy('code').orderBy('limitKind').execute(),
    all: () => reader.selectFrom('alarm').selectAll().orderBy('raisedAtMs').orderBy('code').orderBy('limitKind').execute(),
    commit: (unit) => writer.commit(unit),
    async pass(ms, stepMs = 1_000) {
      for (let passedMs = 0; passedMs < ms; passedMs += stepMs) {
        clock.advance(Math.min(stepMs, ms - passedMs));
        await bench.alarms.tick();
      }
    },
    async restart() {
      await bench.alarms.close();
      bench.alarms = createAlarms(opened.core, port);
      await bench.alarms.start();
      await bench.alarms.settled();
    },
    async close() {
      await bench.alarms.close();
      await opened.close();
    },
  };

  let step = 0;
  function addToLedger(
    tx: Transaction,
    row: Pick<NewRow<'doseLedger'>, 'sourceKind' | 'sourceId' | 'atMs' | 'deltaMl' | 'receivedMs' | 'headId'>,
  ) {
    tx.run(
      query
        .insertInto('doseLedger')
        .values({ siteId, systemId, step: step++, kind: 'carbon', productRevisionId: null, oxygenDemandMg: null, ...row }),
    );
  }

  function runRow(given: Partial<NewRow<'run'>> & { ml: number }): NewRow<'run'> {
    const nowMs = clock.nowMs();
    const begunMs = given.begunMs ?? nowMs;
    return {
      ...{ deviceId: pumpId, run: randomUUID(), siteId, systemId, headId, head: 1, kind: 'carbon', productRevisionId: null },
      ...{ cause: 'button', orderId: null, scheduleVersion: null, dueMs: null, begunMs, begunReceivedMs: nowMs, endedMs: begunMs },
      ...{ onMs: null, odometerMl: null, odometerEpoch: null, interrupted: 0, endedPayload: null, flags: '[]', receivedMs: nowMs },
      ...given,
    };
  }

  /** The run as it is known so far, and in the ledger what is new of it. */
  function writeRun(tx: Transaction, row: NewRow<'run'>): void {
    const known = tx.first(query.selectFrom('run').select('ml').where('deviceId', '=', row.deviceId).where('run', '=', row.run));
    if (known === undefined) tx.run(query.insertInto('run').values(row));
    else tx.run(query.updateTable('run').set({ ml: row.ml, endedMs: row.endedMs }).where('run', '=', row.run));
    const deltaMl = row.ml - (known?.ml ?? 0);
    const atMs = row.endedMs ?? clock.nowMs();
    const { receivedMs, headId } = row;
    if (deltaMl !== 0) {
      addToLedger(tx, {
        sourceKind: 'run',
        sourceId: runSourceId(row.deviceId, row.run),
        atMs,
        deltaMl,
        receivedMs,
        headId: headId ?? null,
      });
    }
    markDirty(tx, systemId, clock.nowMs());
  }

  return bench;
}
