import { uuidv7 } from 'uuidv7';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { BadInputError, RuleError } from '../../../server/errors.ts';
import type { ScheduleBody } from '../../../server/schedules/put-schedule.ts';
import { keeper, openPumpScene, owner, type PumpScene } from '../../helpers/pump-scene.ts';

let scene: PumpScene;

beforeEach(async () => {
  scene = await openPumpScene();
});

afterEach(() => scene.close());

type Entry = ScheduleBody['heads'][number];
const body = (heads: Entry[], more: Partial<ScheduleBody> = {}): ScheduleBody => ({ heads, confirmUnknownCeiling: false, ...more });

async function put(heads: Entry[], more: Partial<ScheduleBody> = {}, who: 'keeper' | 'owner' = 'keeper') {
  await scene.schedules.put(scene.systemId, body(heads, more), who === 'owner' ? owner : keeper, who);
  await scene.schedules.publishDue();
}

const published = () => scene.publisher.schedules(scene.device.id);
const versionRows = () => scene.opened.core.reader.selectFrom('scheduleVersion').selectAll().orderBy('version').execute();

describe('a schedule set by hand', () => {
  it('is published retained, with the portions and the ceilings of the pump', async () => {
    const headId = await scene.addHead({ head: 1 });
    await put([{ headId, mlPerDay: 2.1, slots: 12 }]);
    expect(scene.publisher.published).toMatchObject([{ topic: `steadfall/${scene.device.id}/schedule`, retain: true }]);
    expect(published()).toEqual([
      {
        version: Math.floor(scene.clock.nowMs() / 1000),
        heads: [
          {
            head: 1,
            enabled: true,
            slotMl: 0.175,
            slotsUtcMin: [600, 640, 680, 720, 760, 800, 840, 880, 920, 960, 1000, 1040],
            mlPerSecond: 1.1,
            maxMlPerRun: 0.21,
            maxMlPerHour: 0.525,
            maxMlPerDay: 2.275,
          },
        ],
      },
    ]);
  });

  it('names each version above the last, also within one second', async () => {
    const headId = await scene.addHead({ head: 1 });
    for (const mlPerDay of [2, 3, 4]) await put([{ headId, mlPerDay, slots: 4 }]);
    const first = Math.floor(scene.clock.nowMs() / 1000);
    expect(published().map((one) => one.version)).toEqual([first, first + 1, first + 2]);
  });

  it('is no new version when nothing changes for the pump', async () => {
    const headId = await scene.addHead({ head: 1 });
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    scene.clock.advance(60_000);
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    expect(published()).toHaveLength(1);
  });

  it('keeps the other heads of the pump as they are', async () => {
    const [one, two] = [await scene.addHead({ head: 1 }), await scene.addHead({ head: 2, kind: 'other', productId: null })];
    await put([{ headId: one, mlPerDay: 2, slots: 4 }]);
    await put([{ headId: two, mlPerDay: 50, slotsUtcMin: [60, 30] }]);
    expect(published().at(-1)?.heads).toMatchObject([
      { head: 1, slotMl: 0.5 },
      { head: 2, slotMl: 25, slotsUtcMin: [30, 60] },
    ]);
  });

  it('gives nothing for a dose of 0, and says so to the pump', async () => {
    const headId = await scene.addHead({ head: 1 });
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    await put([{ headId, mlPerDay: 0, slots: 4 }]);
    expect(published().at(-1)?.heads).toMatchObject([{ head: 1, enabled: false, slotsUtcMin: [] }]);
  });

  it('lies between 10:00 and 18:00 of the site, whatever that is in UTC', async () => {
    const far = await openPumpScene({ timeZone: 'Pacific/Auckland', startMs: Date.parse('2026-06-15T00:00:00Z') });
    try {
      const headId = await far.addHead({ head: 1 });
      await far.schedules.put(far.systemId, body([{ headId, mlPerDay: 2, slots: 4 }]), keeper, 'keeper');
      await far.schedules.publishDue();
      // 10:00, 12:00, 14:00 and 16:00 at +12:00.
      expect(far.publisher.schedules(far.device.id).at(-1)?.heads[0]?.slotsUtcMin).toEqual([0, 120, 240, 1320]);
    } finally {
      await far.close();
    }
  });

  it('leaves a stopped head stopped', async () => {
    const headId = await scene.addHead({ head: 1 });
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    scene.publisher.connected.clear();
    await scene.stops.stop(scene.systemId, undefined, keeper);
    await put([{ headId, mlPerDay: 3, slots: 4 }]);
    expect(published().at(-1)?.heads).toMatchObject([{ head: 1, enabled: false, slotMl: 0.75 }]);
  });
});

describe('a schedule that cannot be', () => {
  it('refuses portions under the smallest accurate one and says what would do', async () => {
    const headId = await scene.addHead({ head: 1, smallestMl: 0.5 });
    await expect(put([{ headId, mlPerDay: 0.4, slots: 1 }])).rejects.toThrow(/Dilute the product/);
    await expect(put([{ headId, mlPerDay: 1, slotsUtcMin: [1, 2, 3] }])).rejects.toThrow(/at most 2 times/);
    expect(await versionRows()).toEqual([]);
  });

  it('gives fewer portions than asked rather than too small ones', async () => {
    const headId = await scene.addHead({ head: 1, smallestMl: 0.5 });
    await put([{ headId, mlPerDay: 2.1, slots: 12 }]);
    expect(published().at(-1)?.heads).toMatchObject([{ slotMl: 0.525, slotsUtcMin: [600, 720, 840, 960] }]);
  });

  it('refuses a head of elsewhere and a head named twice, and stores nothing', async () => {
    const headId = await scene.addHead({ head: 1 });
    await expect(put([{ headId: uuidv7(), mlPerDay: 1, slots: 1 }])).rejects.toThrow(BadInputError);
    const twice = { headId, mlPerDay: 1, slots: 1 };
    await expect(put([twice, twice])).rejects.toMatchObject({ errors: [{ path: 'heads.1.headId' }] });
    expect(await versionRows()).toEqual([]);
  });
});

describe('the ceiling', () => {
  it('is the label dose, and takes the label dose itself', async () => {
    const headId = await scene.addHead({ head: 1 });
    await put([{ headId, mlPerDay: 8.4, slots: 12 }]);
    await expect(put([{ headId, mlPerDay: 8.5, slots: 12 }])).rejects.toMatchObject({ rule: 'above-ceiling' });
    expect(published()).toHaveLength(1);
  });

  it('holds all carbon heads of the system together', async () => {
    const [one, two] = [await scene.addHead({ head: 1 }), await scene.addHead({ head: 2 })];
    await put([{ headId: one, mlPerDay: 5, slots: 4 }]);
    await expect(put([{ headId: two, mlPerDay: 4, slots: 4 }])).rejects.toThrow(RuleError);
    await put([{ headId: two, mlPerDay: 3.4, slots: 4 }]);
  });

  it('gives way to the written override of the owner, and to nobody else', async () => {
    const headId = await scene.addHead({ head: 1 });
    const override = { reason: 'Tested with the maker of the product' };
    await expect(put([{ headId, mlPerDay: 9, slots: 12 }], { override }, 'keeper')).rejects.toThrow(/Only the owner/);
    await put([{ headId, mlPerDay: 9, slots: 12 }], { override }, 'owner');
    const rows = await scene.opened.core.reader.selectFrom('headSchedule').selectAll().execute();
    expect(rows).toMatchObject([{ mlPerDay: 9, overrideReason: override.reason }]);
  });

  it('asks to confirm a dose whose ceiling nothing tells, and then takes it', async () => {
    const headId = await scene.addHead({ head: 1, productId: null });
    await expect(put([{ headId, mlPerDay: 1, slots: 2 }])).rejects.toMatchObject({ errors: [{ path: 'confirmUnknownCeiling' }] });
    await put([{ headId, mlPerDay: 1, slots: 2 }], { confirmUnknownCeiling: true });
    expect(published()).toHaveLength(1);
  });

  it('does not hold what is not carbon', async () => {
    const headId = await scene.addHead({ head: 1, kind: 'other', productId: null });
    await put([{ headId, mlPerDay: 500, slots: 4 }]);
    expect(published()).toHaveLength(1);
  });
});

describe('under a latched alarm', () => {
  it('gives a head its dose and stops it in the same unit, so that no schedule ever lets it dose', async () => {
    const { siteId, systemId } = scene;
    const alarmId = uuidv7();
    const flags = { active: 0, acknowledged: 1, latched: 1, interlock: 1, shelvedUntilMs: null, returnedAtMs: null, closedAtMs: null };
    const words = { code: 'volume-hour', target: 'system', limitKind: 'hard', priority: 'urgent', unit: 'mL', evidence: '{}' } as const;
    const rest = { tripKey: 'system', tripSeq: 1, value: 3, limitValue: 2, takenBy: null, arriveAtMs: null, raisedAtMs: 0 };
    await scene.insert('alarm', { id: alarmId, siteId, systemId, ...words, ...flags, ...rest });
    const headId = await scene.addHead({ head: 1 });
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    expect(await scene.openStops()).toMatchObject([{ head: 1, cause: 'interlock', alarmId }]);
    expect((await versionRows()).map((row) => (JSON.parse(row.body) as { heads: unknown[] }).heads)).toEqual([
      [expect.objectContaining({ head: 1, enabled: false, slotMl: 0.5 })],
    ]);
  });
});

describe('publishing', () => {
  it('tries again when the broker did not take it, and never publishes an older version after a newer one', async () => {
    const headId = await scene.addHead({ head: 1 });
    scene.publisher.failure = new Error('not now');
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    await put([{ headId, mlPerDay: 3, slots: 4 }]);
    scene.publisher.failure = null;
    await scene.schedules.publishDue();
    expect(published().map((one) => one.heads[0]?.slotMl)).toEqual([0.75]);
    await scene.schedules.publishDue();
    expect(published()).toHaveLength(1);
  });

  it('publishes what was committed before a restart, and everything again when asked to', async () => {
    const headId = await scene.addHead({ head: 1 });
    scene.publisher.failure = new Error('the server is about to die');
    await put([{ headId, mlPerDay: 2, slots: 4 }]);
    scene.publisher.failure = null;
    await scene.restart();
    await scene.schedules.publishDue();
    await scene.schedules.republishAll();
    expect(published().map((one) => one.version)).toEqual([expect.any(Number), published()[0]?.version]);
  });
});
