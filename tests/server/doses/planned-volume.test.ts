import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type PlannedVolume, plannedVolumeIn, readPlannedVolume } from '../../../server/doses/planned-volume.ts';
import { query } from '../../../server/db/open.ts';
import { keeper, openPumpScene, type PumpScene } from '../../helpers/pump-scene.ts';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const today = Date.parse('2026-03-01T00:00:00Z');

let scene: PumpScene;

beforeEach(async () => {
  scene = await openPumpScene({ startMs: today - 10 * DAY_MS });
});

afterEach(() => scene.close());

const setDose = (headId: string, mlPerDay: number) =>
  scene.schedules.put(scene.systemId, { heads: [{ headId, mlPerDay, slots: 4 }], confirmUnknownCeiling: true }, keeper, 'keeper');

/** Asks the same inside a unit of work and on the reading connection, which must agree. */
async function bothWays<Answer>(fromMs: number, toMs: number, ask: (volume: PlannedVolume) => Answer): Promise<Answer> {
  const { core } = scene.opened;
  const inUnit = await core.writer.commit((tx) => ask(plannedVolumeIn(tx, scene.systemId, fromMs, toMs)));
  expect(ask(await readPlannedVolume(core.reader, scene.systemId, fromMs, toMs))).toEqual(inUnit);
  return inUnit;
}

describe('the volume planned for a system', () => {
  it('is the same inside a unit of work and on the reading connection', async () => {
    const headId = await scene.addHead({ head: 1 });
    await setDose(headId, 2);
    const slots = await bothWays(today, today + DAY_MS, (volume) => volume.plannedSlots(today, today + DAY_MS));
    expect(slots).toMatchObject([10, 12, 14, 16].map((hour) => ({ headId, head: 1, ml: 0.5, dueMs: today + hour * HOUR_MS })));
    expect(await bothWays(today, today + 12 * HOUR_MS, (volume) => volume.plannedMl(today, today + 12 * HOUR_MS))).toBe(1);
  });

  it('adds up the carbon heads of all pumps, and no other head', async () => {
    const second = await scene.addDevice();
    await setDose(await scene.addHead({ head: 1 }), 2);
    await setDose(await scene.addHead({ head: 1 }, second.id), 4);
    await setDose(await scene.addHead({ head: 2, kind: 'other', productId: null }), 100);
    expect(await bothWays(today, today + DAY_MS, (volume) => volume.plannedMl(today, today + DAY_MS))).toBe(6);
    expect(await bothWays(today, today + DAY_MS, (volume) => volume.largestSlotMl(today, today + DAY_MS))).toBe(1);
  });

  it('knows the schedule in force at the start of a window and each that followed', async () => {
    const headId = await scene.addHead({ head: 1 });
    await setDose(headId, 2);
    scene.clock.set(today + 13 * HOUR_MS);
    await setDose(headId, 4);
    const ask = (volume: PlannedVolume) => [
      volume.plannedMl(today, today + DAY_MS),
      volume.largestSlotMl(today, today + 13 * HOUR_MS),
      volume.largestSlotMl(today, today + 14 * HOUR_MS),
    ];
    expect(await bothWays(today, today + DAY_MS, ask)).toEqual([3, 0.5, 1]);
  });

  it('says the same of a window whatever windows it was asked about before', async () => {
    const headId = await scene.addHead({ head: 1 });
    for (const [hour, mlPerDay] of [
      [0, 2],
      [5, 4],
      [9, 0],
    ] as const) {
      scene.clock.set(today + hour * HOUR_MS);
      await setDose(headId, mlPerDay);
    }
    const ends = Array.from({ length: 13 }, (_, hour) => [-1, 0, 1].map((apartMs) => today + hour * HOUR_MS + apartMs)).flat();
    await scene.opened.core.writer.commit((tx) => {
      const load = () => plannedVolumeIn(tx, scene.systemId, today - DAY_MS, today + DAY_MS);
      const asked = load();
      for (const fromMs of ends) {
        for (const toMs of ends.filter((endMs) => endMs > fromMs)) {
          const fresh = load();
          expect([asked.largestSlotMl(fromMs, toMs), asked.isScheduled(fromMs, toMs)]).toEqual([
            fresh.largestSlotMl(fromMs, toMs),
            fresh.isScheduled(fromMs, toMs),
          ]);
        }
      }
    });
  });

  it('ends with the use of a head for carbon', async () => {
    const headId = await scene.addHead({ head: 1 });
    await setDose(headId, 2);
    const end = query.updateTable('headAssignment').set({ toMs: today + 13 * HOUR_MS });
    await scene.opened.core.writer.commit((tx) => tx.run(end));
    expect(await bothWays(today, today + DAY_MS, (volume) => volume.plannedMl(today, today + DAY_MS))).toBe(1);
  });

  it('is not scheduled before the first schedule or while every head is stopped', async () => {
    const headId = await scene.addHead({ head: 1 });
    scene.clock.set(today);
    await setDose(headId, 2);
    scene.clock.set(today + 13 * HOUR_MS);
    scene.publisher.connected.clear();
    await scene.stops.stop(scene.systemId, undefined, keeper);
    const ask = (volume: PlannedVolume) => [
      volume.isScheduled(today - DAY_MS, today),
      volume.isScheduled(today - DAY_MS, today + 1),
      volume.isScheduled(today + 13 * HOUR_MS, today + DAY_MS),
    ];
    expect(await bothWays(today - DAY_MS, today + DAY_MS, ask)).toEqual([false, true, false]);
    expect(
      await bothWays(today, today + DAY_MS, (volume) => volume.scheduledSlots(today, today + DAY_MS).map((slot) => slot.enabled)),
    ).toEqual([true, true, false, false]);
  });
});
