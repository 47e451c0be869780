import type { FleetSystem } from '#shared/demo/fleet-plan.ts';
import { schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { createDevices } from '../devices/create-devices.ts';
import { createEvents } from '../records/create-events.ts';
import { createHandDoses } from '../records/create-hand-doses.ts';
import { createTests } from '../records/create-tests.ts';
import { createHeads } from '../rig/create-heads.ts';
import { createReservoirs } from '../rig/create-reservoirs.ts';
import { putSchedule } from '../schedules/put-schedule.ts';
import { reviseSchedule } from '../schedules/revise-schedule.ts';
import { createSystems } from '../systems/create-systems.ts';
import { demoId } from './demo-ids.ts';
import { demoTime } from './demo-time.ts';
import { demoWater } from './fleet-systems.ts';
import { resultSeries } from './result-series.ts';
import type { DemoSite, DemoSystem } from './scenario.ts';

interface SeedOptions {
  anchorMs: number;
  setUpMs: number;
  /** Who did everything. */
  userId: string;
}

type SeedSystem = (site: DemoSite, system: DemoSystem) => Promise<FleetSystem>;

/** Writes one system of the demo with its rig and records, in the order in which they could have come about. */
export function createSystemSeeder(core: Core, { anchorMs, setUpMs, userId }: SeedOptions): SeedSystem {
  let nowMs = setUpMs;
  const past: Core = { ...core, clock: { nowMs: () => nowMs } };
  const systems = createSystems(past);
  const devices = createDevices({ core: past, disconnect: () => undefined });
  const heads = createHeads(past, { revise: reviseSchedule });
  const reservoirs = createReservoirs(past);
  const tests = createTests(past);
  const events = createEvents(past);
  const handDoses = createHandDoses(past);
  const id = (name: string) => demoId(anchorMs, name);

  /** Sets the services' clock to a time of the scenario, and writes that time down. */
  function at(daysAgo: number, hour: number): string {
    nowMs = demoTime(anchorMs, daysAgo, hour);
    return new Date(nowMs).toISOString();
  }

  return async (site, system) => {
    const { key } = system;
    const siteId = id(site.key);
    const systemId = id(key);
    const productId = id(site.product.key);
    const here = { siteId, systemId, userId };

    async function seedDevice(kind: 'pump' | 'probe', name: string) {
      const deviceId = id(`${key} ${kind}`);
      const { value } = await devices.create({ ...here, body: { id: deviceId, name, kind } });
      const password = value.credentials.password ?? (await devices.renewCredentials({ siteId, userId, deviceId })).credentials.password;
      return { deviceId, password };
    }

    async function seedReservoir(): Promise<string | null> {
      if (system.reservoir === null) return null;
      const { refills, ...fields } = system.reservoir;
      const reservoirId = id(`${key} reservoir`);
      await reservoirs.create({ ...here, body: { ...fields, id: reservoirId, levelSeriesId: null } });
      for (const { daysAgo, ml, lot } of refills) {
        const body = { id: id(`${key} refill ${daysAgo}`), productId, at: at(daysAgo, 7), ml, lot };
        await reservoirs.refill({ siteId, userId, reservoirId, body });
      }
      return reservoirId;
    }

    /** The dose of a head from now on; nothing when it is there already. */
    async function seedDose(headId: string, mlPerDay: number): Promise<void> {
      await core.writer.commit((tx) => {
        const earlier = query.selectFrom('headSchedule').select('id').where('headId', '=', headId).where('fromMs', '=', nowMs);
        if (tx.first(earlier) !== undefined) return;
        const body = { heads: [{ headId, mlPerDay, slots: 12 }], confirmUnknownCeiling: false };
        putSchedule(tx, { systemId, body, actor: { kind: 'user', id: userId }, role: 'keeper', nowMs });
      });
    }

    async function seedPump(reservoirId: string | null): Promise<FleetSystem['pump']> {
      if (system.pump === null) return null;
      const { name, mlPerSecond, smallestMl, doses } = system.pump;
      const credentials = await seedDevice('pump', name);
      const headId = id(`${key} head`);
      const use = { kind: 'carbon' as const, productId, reservoirId, mlPerSecond, smallestMl };
      await heads.create({ ...here, body: { ...use, id: headId, deviceId: credentials.deviceId, head: 1 } });
      for (const { daysAgo, mlPerDay } of doses) {
        at(daysAgo, 8);
        await seedDose(headId, mlPerDay);
      }
      const versions = await core.reader
        .selectFrom('scheduleVersion')
        .select(['fromMs', 'body'])
        .where('deviceId', '=', credentials.deviceId)
        .orderBy('version')
        .execute();
      const schedules = versions.map(({ fromMs, body }) => ({ fromMs, payload: schedulePayloadSchema.parse(JSON.parse(body)) }));
      return { ...credentials, heads: [1], mlPerSecond, schedules };
    }

    async function seedRecords(): Promise<void> {
      for (const story of system.results) {
        for (const { daysAgo, value } of resultSeries(key, story)) {
          const { quantity, unit } = story;
          const body = { id: id(`${key} ${quantity} ${daysAgo}`), at: at(daysAgo, 9), quantity, unit, value, below: false, note: '' };
          await tests.create({ ...here, role: 'keeper', body });
        }
      }
      for (const { daysAgo, hour, kind, litres, note } of system.events) {
        const body = { id: id(`${key} ${kind} ${daysAgo} ${hour}`), kind, at: at(daysAgo, hour), litres: litres ?? null, note };
        await events.create({ ...here, body });
      }
      for (const { daysAgo, hour, ml } of system.handDoses) {
        const body = { id: id(`${key} hand ${daysAgo}`), productId, at: at(daysAgo, hour), ml };
        await handDoses.create({ ...here, body });
      }
    }

    nowMs = setUpMs;
    const { name, displayLitres, sumpLitres, displacementLitres } = system;
    await systems.create({ siteId, userId, body: { id: systemId, name, displayLitres, sumpLitres, displacementLitres } });
    const probe = system.probe === null ? null : { ...(await seedDevice('probe', system.probe.name)), channels: system.probe.channels };
    const reservoirId = await seedReservoir();
    nowMs = setUpMs;
    const pump = await seedPump(reservoirId);
    await seedRecords();
    return { ...demoWater(anchorMs, site, system), pump, probe };
  };
}
