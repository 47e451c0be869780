import { createAlarms } from '../../server/alarms/create-alarms.ts';
import { openReadingConnection } from '../../server/db/open.ts';
import { createIngest } from '../../server/ingest/create-ingest.ts';
import { createOrders } from '../../server/orders/create-orders.ts';
import { createSchedules } from '../../server/schedules/create-schedules.ts';
import { createStops } from '../../server/stops/create-stops.ts';
import type { BenchPlace } from './bench-place.ts';
import { medianOf, type Ratio, ratioOf } from './ratio.ts';

const ROUNDS = 15;
const COMMITS = 30;
const GIVE_UP_MS = 10_000;
const slotsUtcMin = Array.from({ length: 12 }, (_, index) => index * 120);
const actor = { kind: 'user', id: 'bench' } as const;
const noBroker = { publish: () => Promise.resolve(), isConnected: () => false };

/** From the commit that puts an overdose into the ledger to the commit that orders the pump to stop. */
export async function benchStopOrder(place: BenchPlace): Promise<Ratio> {
  const { core } = place;
  const schedules = createSchedules(core, noBroker);
  const orders = createOrders(core, noBroker);
  const stops = createStops(core, orders, schedules);
  const alarms = createAlarms(core, stops);
  const ingest = createIngest(core, { ...orders.hooks, onRun: () => {} });
  const connection = openReadingConnection(core.databaseFile);
  const orderOf = connection.prepare(`select 1 from deviceOrder where deviceId = ? and "do" = 'stop'`);
  const ledgerOf = connection.prepare('select 1 from doseLedger where systemId = ?');
  await alarms.start();

  async function overdose(): Promise<number> {
    const { systemId, deviceId, headId } = await place.addPump();
    await schedules.put(systemId, { heads: [{ headId, mlPerDay: 6, slotsUtcMin }], confirmUnknownCeiling: true }, actor, 'keeper');
    await alarms.settled();
    let ledgerMs: number | undefined;
    const stopped = new Promise<number>((resolve, reject) => {
      const timer = setTimeout(() => reject(new Error('An overdose was not answered by a stop order')), GIVE_UP_MS);
      const unsubscribe = core.writer.onCommitted(() => {
        if (ledgerMs === undefined && ledgerOf.get(systemId) !== undefined) ledgerMs = performance.now();
        if (ledgerMs === undefined || orderOf.get(deviceId) === undefined) return;
        clearTimeout(timer);
        unsubscribe();
        resolve(performance.now() - ledgerMs);
      });
    });
    const nowMs = core.clock.nowMs();
    const payload = Buffer.from(JSON.stringify({ run: 'a', head: 1, phase: 'ended', atMs: nowMs, ml: 9, cause: 'button' }));
    await ingest.receive({ deviceId, word: 'run', payload, receivedMs: nowMs, isWill: false });
    const tookMs = await stopped;
    await alarms.settled();
    return tookMs;
  }

  /** The least that a commit can be and still wait for the disk: one number in one row. */
  async function smallestCommit(): Promise<number> {
    const tookMs: number[] = [];
    for (let index = 0; index < COMMITS; index += 1) {
      const beganMs = performance.now();
      await core.writer.commit((tx) => tx.prepare('update site set createdAtMs = createdAtMs + 1').run());
      tookMs.push(performance.now() - beganMs);
    }
    return medianOf(tookMs);
  }

  try {
    await overdose();
    const rounds: number[] = [];
    for (let round = 0; round < ROUNDS; round += 1) rounds.push((await overdose()) / (await smallestCommit()));
    const means = 'time from the commit of an overdose to the commit of the stop order, in smallest commits of one row';
    return ratioOf('stop-order', means, rounds);
  } finally {
    connection.close();
    await alarms.close();
    stops.close();
    await orders.close();
    await schedules.close();
  }
}
