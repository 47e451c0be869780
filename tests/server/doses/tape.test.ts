import { uuidv7 } from 'uuidv7';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { createDoses } from '../../../server/doses/create-doses.ts';
import { runSourceId } from '../../../server/doses/run-source-id.ts';
import { query } from '../../../server/db/open.ts';
import { BadInputError } from '../../../server/errors.ts';
import { keeper, openPumpScene, type PumpScene } from '../../helpers/pump-scene.ts';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const today = Date.parse('2026-03-01T00:00:00Z');

let scene: PumpScene;
let headId: string;

beforeEach(async () => {
  scene = await openPumpScene({ startMs: today - DAY_MS });
  headId = await scene.addHead({ head: 1 });
  // 4 portions of 0.5 mL at 10:00, 12:00, 14:00 and 16:00.
  await setDose(2);
  scene.clock.set(today + 12 * HOUR_MS + 10 * 60_000);
});

afterEach(() => scene.close());

const setDose = (mlPerDay: number) =>
  scene.schedules.put(scene.systemId, { heads: [{ headId, mlPerDay, slots: 4 }], confirmUnknownCeiling: false }, keeper, 'keeper');
const doses = () => createDoses(scene.opened.core);
const tape = (fromMs?: number, toMs?: number) => doses().tape(scene.systemId, fromMs, toMs);
const marks = async () => (await tape()).slots.map((slot) => [(slot.dueT - today) / HOUR_MS, slot.mark]);

async function heard(more: { online?: number; heardAtMs?: number; changedAtMs?: number } = {}) {
  const times = { online: 1, heardAtMs: scene.clock.nowMs(), changedAtMs: today - DAY_MS, ...more };
  const rest = { scheduleVersion: null, clockOffsetMs: null, clockUnset: 0, heads: '[]' };
  await scene.insert('deviceState', { deviceId: scene.device.id, ...times, ...rest });
}

interface RunSpec {
  run?: string;
  head?: number;
  ml?: number;
  dueMs?: number | null;
  cause?: 'schedule' | 'button';
  kind?: 'carbon' | 'other';
  begunMs?: number;
  endedMs?: number | null;
}

async function run(spec: RunSpec) {
  const { run: id = uuidv7(), head = 1, ml = 0.5, dueMs = null, cause = 'schedule', kind = 'carbon' } = spec;
  const begunMs = spec.begunMs ?? (dueMs ?? 0) + 2_000;
  const { siteId, systemId, device } = scene;
  const owner = { siteId, systemId, headId: head === 1 ? headId : null, kind, productRevisionId: null };
  const rest = { orderId: null, scheduleVersion: 1, onMs: null, odometerMl: null, odometerEpoch: null, interrupted: 0, endedPayload: null };
  const times = {
    begunMs,
    begunReceivedMs: begunMs,
    endedMs: spec.endedMs === undefined ? begunMs + 1_000 : spec.endedMs,
    receivedMs: begunMs,
  };
  await scene.insert('run', { deviceId: device.id, run: id, head, cause, dueMs, ml, flags: '[]', ...owner, ...rest, ...times });
  const ledger = {
    sourceKind: 'run' as const,
    sourceId: runSourceId(device.id, id),
    step: 1,
    atMs: begunMs,
    deltaMl: ml,
    oxygenDemandMg: null,
  };
  await scene.insert('doseLedger', { ...owner, ...ledger, receivedMs: begunMs });
}

async function handDose(atMs: number, ml: number) {
  const id = uuidv7();
  const { siteId, systemId, productId } = scene;
  const revision = await scene.opened.core.reader.selectFrom('productRevision').select('id').executeTakeFirstOrThrow();
  const row = { id, siteId, systemId, productId, productRevisionId: revision.id, atMs, ml, actorId: keeper.id, createdAtMs: atMs };
  await scene.insert('handDose', row);
  const source = {
    sourceKind: 'hand' as const,
    sourceId: id,
    step: 1,
    headId: null,
    kind: 'carbon' as const,
    productRevisionId: revision.id,
  };
  await scene.insert('doseLedger', { siteId, systemId, ...source, atMs, deltaMl: ml, oxygenDemandMg: null, receivedMs: atMs });
  return id;
}

describe('the drop tape', () => {
  it("shows the site's day with what came of each portion", async () => {
    await heard();
    await run({ run: 'ten', dueMs: today + 10 * HOUR_MS });
    const shown = await tape();
    expect([shown.fromT, shown.toT, shown.nowT]).toEqual([today, today + DAY_MS, scene.clock.nowMs()]);
    expect(shown.slots).toMatchObject([
      { headId, head: 1, dueT: today + 10 * HOUR_MS, ml: 0.5, mark: 'delivered', deliveredMl: 0.5, runId: 'ten' },
      { dueT: today + 12 * HOUR_MS, mark: 'missed', deliveredMl: 0, runId: null },
      { dueT: today + 14 * HOUR_MS, mark: 'planned' },
      { dueT: today + 16 * HOUR_MS, mark: 'planned' },
    ]);
    expect(shown).toMatchObject({ givenMl: 0.5, plannedMl: 2, plannedSoFarMl: 1, extras: [] });
  });

  it('shows hand doses and runs that nobody planned beside the slots, and counts them', async () => {
    await heard();
    const handId = await handDose(today + 9 * HOUR_MS, 1.5);
    await run({ run: 'pressed', cause: 'button', begunMs: today + 11 * HOUR_MS, ml: 0.3 });
    await run({ run: 'stranger', head: 9, cause: 'button', begunMs: today + 8 * HOUR_MS, ml: 0.2 });
    await run({ run: 'not-carbon', cause: 'button', kind: 'other', begunMs: today + 7 * HOUR_MS, ml: 40 });
    const shown = await tape();
    expect(shown.extras).toEqual([
      { kind: 'unplanned', t: today + 8 * HOUR_MS, ml: 0.2, deviceId: scene.device.id, head: 9, sourceId: 'stranger' },
      { kind: 'hand', t: today + 9 * HOUR_MS, ml: 1.5, deviceId: null, head: null, sourceId: handId },
      { kind: 'unplanned', t: today + 11 * HOUR_MS, ml: 0.3, deviceId: scene.device.id, head: 1, sourceId: 'pressed' },
    ]);
    expect(shown.givenMl).toBeCloseTo(2, 9);
  });

  it('leaves portions of a pump that is silent unheard', async () => {
    await heard({ online: 0, heardAtMs: today + 9 * HOUR_MS });
    expect(await marks()).toEqual([
      [10, 'unheard'],
      [12, 'unheard'],
      [14, 'planned'],
      [16, 'planned'],
    ]);
  });

  it('shows the portions that a stop takes as unheard until the pump has proved it, then by who stopped', async () => {
    await heard();
    scene.publisher.connected.clear();
    scene.clock.set(today + 11 * HOUR_MS);
    await scene.stops.stop(scene.systemId, undefined, keeper);
    scene.clock.set(today + 13 * HOUR_MS);
    expect(await marks()).toEqual([
      [10, 'missed'],
      [12, 'unheard'],
      [14, 'unheard'],
      [16, 'unheard'],
    ]);
    await scene.state(scene.device.id, [{ head: 1, state: 'stopped' }]);
    expect(await marks()).toEqual([
      [10, 'missed'],
      [12, 'held'],
      [14, 'held'],
      [16, 'held'],
    ]);
    expect(await tape()).toMatchObject({ plannedMl: 0.5, plannedSoFarMl: 0.5 });
    await scene.opened.core.writer.commit((tx) => {
      const { siteId, systemId, clock } = scene;
      scene.stops.stopHeads(tx, { siteId, systemId, cause: 'interlock', alarmId: uuidv7(), headConcerned: null, nowMs: clock.nowMs() });
    });
    expect((await marks()).at(-1)).toEqual([16, 'interlocked']);
  });

  it('takes the version of the schedule that the pump says it runs for the proof of a stop', async () => {
    await heard();
    scene.publisher.connected.clear();
    await scene.stops.stop(scene.systemId, undefined, keeper);
    const versions = await scene.opened.core.reader.selectFrom('scheduleVersion').select('version').orderBy('version').execute();
    const running = (scheduleVersion: number | undefined) =>
      scene.opened.core.writer.commit((tx) => tx.run(query.updateTable('deviceState').set({ scheduleVersion })));
    await running(versions.at(0)?.version);
    expect((await marks()).at(-1)).toEqual([16, 'unheard']);
    await running(versions.at(-1)?.version);
    expect((await marks()).at(-1)).toEqual([16, 'held']);
  });

  it('takes no version from before a stop for its proof, though it has the head off', async () => {
    await heard();
    await scene.stops.stop(scene.systemId, undefined, keeper);
    const versions = await scene.opened.core.reader.selectFrom('scheduleVersion').select('version').orderBy('version').execute();
    const scheduleVersion = versions.at(-1)?.version;
    const stoppedAtMs = scene.clock.nowMs() + 1;
    await scene.opened.core.writer.commit((tx) => {
      tx.run(query.updateTable('deviceState').set({ scheduleVersion }));
      tx.run(query.updateTable('headStop').set({ stoppedAtMs }));
    });
    expect((await marks()).at(-1)).toEqual([16, 'unheard']);
  });

  it('begins and ends the day where the site does, also when its clocks change', async () => {
    const far = await openPumpScene({ timeZone: 'Europe/Berlin', startMs: Date.parse('2026-03-29T12:00:00Z') });
    try {
      const shown = await createDoses(far.opened.core).tape(far.systemId);
      expect([shown.fromT, shown.toT]).toEqual([Date.parse('2026-03-28T23:00:00Z'), Date.parse('2026-03-29T22:00:00Z')]);
    } finally {
      await far.close();
    }
  });

  it('takes a range, its start inclusive and its end exclusive', async () => {
    const shown = await tape(today + 10 * HOUR_MS, today + 14 * HOUR_MS);
    expect(shown.slots.map((slot) => (slot.dueT - today) / HOUR_MS)).toEqual([10, 12]);
    expect(shown).toMatchObject({ plannedMl: 1, plannedSoFarMl: 1 });
  });

  it('refuses a range that is empty or far too long', async () => {
    await expect(tape(today, today)).rejects.toThrow(BadInputError);
    await expect(tape(today, today + 32 * DAY_MS)).rejects.toThrow(BadInputError);
  });
});

describe('dose columns', () => {
  const columns = (fromMs: number, toMs: number, points = 400) => doses().doses(scene.systemId, fromMs, toMs, points);

  it('tell pump from hand in buckets of multiples of 15 minutes, the empty ones left out', async () => {
    await run({ dueMs: today + 10 * HOUR_MS });
    await run({ cause: 'button', begunMs: today + 10 * HOUR_MS + 14 * 60_000, ml: 0.25 });
    await handDose(today + 11 * HOUR_MS + 16 * 60_000, 1);
    expect(await columns(today, today + DAY_MS)).toMatchObject({
      resolutionMs: 900_000,
      t: [today + 10 * HOUR_MS, today + 11.25 * HOUR_MS],
      pumpMl: [0.75, 0],
      handMl: [0, 1],
    });
  });

  it('widen to the points asked for, and keep every mL', async () => {
    for (let day = 0; day < 20; day += 1) await run({ dueMs: today - day * DAY_MS + 10 * HOUR_MS });
    for (const points of [2, 3, 7, 24, 100, 1000]) {
      const answer = await columns(today - 30 * DAY_MS, today + DAY_MS, points);
      expect(answer.t.length).toBeLessThanOrEqual(points);
      expect(answer.resolutionMs % 900_000).toBe(0);
      expect(answer.pumpMl.reduce((sum, ml) => sum + ml, 0)).toBeCloseTo(10, 9);
    }
  });

  it('are days of the site, whatever their length', async () => {
    const zone = await openPumpScene({ timeZone: 'Europe/Berlin', startMs: Date.parse('2026-03-31T12:00:00Z') });
    try {
      const at = (text: string) => Date.parse(text);
      const { siteId, systemId } = zone;
      const source = { sourceKind: 'hand' as const, step: 1, headId: null, kind: 'carbon' as const, productRevisionId: null };
      for (const [index, atMs] of [at('2026-03-28T22:59:00Z'), at('2026-03-28T23:00:00Z'), at('2026-03-29T22:00:00Z')].entries()) {
        const rest = { sourceId: `${index}`, atMs, deltaMl: 1, oxygenDemandMg: null, receivedMs: atMs };
        await zone.insert('doseLedger', { siteId, systemId, ...source, ...rest });
      }
      const answer = await createDoses(zone.opened.core).doses(systemId, at('2026-03-27T23:00:00Z'), at('2026-03-30T22:00:00Z'), 4);
      expect(answer.resolutionMs).toBe(DAY_MS);
      expect(answer.t).toEqual([at('2026-03-27T23:00:00Z'), at('2026-03-28T23:00:00Z'), at('2026-03-29T22:00:00Z')]);
    } finally {
      await zone.close();
    }
  });

  it('carry the planned dose as steps, with a stop as none', async () => {
    scene.publisher.connected.clear();
    scene.clock.set(today + 11 * HOUR_MS);
    await setDose(3);
    scene.clock.set(today + 13 * HOUR_MS);
    await scene.stops.stop(scene.systemId, undefined, keeper);
    const { planned } = await columns(today - 2 * DAY_MS, today + DAY_MS);
    expect(planned).toEqual([
      { fromT: today - 2 * DAY_MS, mlPerDay: 0 },
      { fromT: today - DAY_MS, mlPerDay: 2 },
      { fromT: today + 11 * HOUR_MS, mlPerDay: 3 },
      { fromT: today + 13 * HOUR_MS, mlPerDay: 0 },
    ]);
  });
});
