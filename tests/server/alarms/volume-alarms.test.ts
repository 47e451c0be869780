import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { evidenceOf } from '../../../server/alarms/alarm-row.ts';
import { query } from '../../../server/db/open.ts';
import { type Bench, DAY, HOUR, MINUTE, openBench } from './alarm-bench.ts';

let bench: Bench;

beforeEach(async () => {
  bench = await openBench();
});

afterEach(() => bench.close());

const limits = async () => (await bench.open()).map((alarm) => `${alarm.code} ${alarm.limitKind}`);

/** A schedule, a week of it given on time, and the evaluator at work at 12:30. */
async function steadyWeek(): Promise<void> {
  await bench.schedule();
  await bench.giveOnTime(bench.clock.nowMs() - 8 * DAY, bench.clock.nowMs());
  await bench.alarms.start();
  await bench.alarms.tick();
}

describe('a system that gets what was planned', () => {
  it('has no alarm', async () => {
    await steadyWeek();
    expect(await bench.all()).toEqual([]);
  });

  it('has none when its runs are reported late', async () => {
    await bench.schedule();
    await bench.alarms.start();
    await bench.giveOnTime(bench.clock.nowMs() - 2 * DAY, bench.clock.nowMs(), bench.clock.nowMs());
    await bench.alarms.tick();
    expect(await bench.all()).toEqual([]);
  });

  it('has none on the day on which clocks change, since windows are counted in UTC', async () => {
    await bench.close();
    bench = await openBench(Date.parse('2026-03-29T23:30:00Z'));
    await steadyWeek();
    expect(await bench.all()).toEqual([]);
  });
});

describe('an overdose', () => {
  it('by one run stops the pumps in the same commit', async () => {
    await steadyWeek();
    await bench.run({ ml: 5 });
    expect(await limits()).toEqual([
      'run-too-long hard',
      'volume-day hard',
      'volume-day soft',
      'volume-hour hard',
      'volume-hour soft',
      'volume-week soft',
    ]);
    const byId = new Map((await bench.open()).map((alarm) => [alarm.id, alarm]));
    expect(bench.port.stops.map((stop) => byId.get(stop.alarmId)?.code)).toEqual(['run-too-long', 'volume-hour']);
    expect(bench.port.stops.map((stop) => stop.headConcerned)).toEqual([{ deviceId: bench.pumpId, head: 1 }, null]);
    expect(bench.port.dispatched).toBeGreaterThan(0);
  });

  it('by many small portions passes soft first and then hard', async () => {
    await steadyWeek();
    await bench.run({ ml: 0.4 });
    await bench.run({ ml: 0.3 });
    // In the hour up to 12:30 one portion of 0.5 mL was due and given: soft is 1.0, hard 1.5 mL.
    expect(await limits()).toEqual(['volume-day soft', 'volume-hour soft']);
    await bench.run({ ml: 0.2 });
    expect(bench.port.stops).toEqual([]);
    await bench.run({ ml: 0.2 });
    expect(await limits()).toContain('volume-hour hard');
    expect(bench.port.stops.length).toBe(1);
  });

  it('by a hand dose on top counts all the same', async () => {
    await steadyWeek();
    await bench.handDose(1.1);
    expect(await limits()).toContain('volume-hour hard');
    expect(bench.port.stops[0]).toMatchObject({ systemId: bench.systemId, cause: 'interlock' });
  });

  it('by two heads together counts for the system', async () => {
    await steadyWeek();
    const second = await bench.addHead(2);
    await bench.run({ ml: 0.55 });
    expect(await limits()).not.toContain('volume-hour hard');
    await bench.run({ ml: 0.55, head: 2, headId: second });
    expect(await limits()).toContain('volume-hour hard');
  });

  it('by a head that nobody registered counts as carbon', async () => {
    await steadyWeek();
    await bench.run({ ml: 1.1, head: 7, headId: null });
    expect(await limits()).toContain('volume-hour hard');
  });

  it('shows what it rests on', async () => {
    await steadyWeek();
    await bench.handDose(0.3);
    bench.clock.advance(1_000);
    await bench.run({ ml: 0.9, cause: 'button' });
    const alarm = (await bench.open()).find((one) => one.code === 'volume-hour' && one.limitKind === 'hard');
    if (alarm === undefined) throw new Error('volume-hour did not go off');
    expect(alarm).toMatchObject({ value: 1.7, limitValue: 1.5, unit: 'mL', priority: 'urgent' });
    const nowMs = bench.clock.nowMs();
    expect(evidenceOf(alarm)).toMatchObject({
      windowFrom: new Date(nowMs - HOUR).toISOString(),
      windowTo: new Date(nowMs).toISOString(),
      plannedMl: 0.5,
      largestSlotMl: 0.5,
      ceilingMlPerDay: 8.4,
      softMl: 1,
      hardMl: 1.5,
      ruleRevision: 0,
      doses: [
        { at: '2026-03-10T12:00:00.000Z', ml: 0.5, source: 'run', cause: 'schedule', dueAt: '2026-03-10T12:00:00.000Z' },
        { at: new Date(nowMs - 1_000).toISOString(), ml: 0.3, source: 'hand', cause: null },
        { at: new Date(nowMs).toISOString(), ml: 0.9, source: 'run', cause: 'button', head: 1, deviceId: bench.pumpId },
      ],
      dosesNotListed: 0,
    });
    const day = (await bench.open()).find((one) => one.code === 'volume-day');
    if (day === undefined) throw new Error('volume-day did not go off');
    expect(evidenceOf(day)).toMatchObject({ plannedMl: 6, scheduleVersions: [{ deviceId: bench.pumpId, version: 1 }] });
  });

  it('that is evaluated again raises nothing twice and stops nothing twice', async () => {
    await steadyWeek();
    await bench.run({ ml: 1.1 });
    const before = await bench.all();
    const stops = bench.port.stops.length;
    await bench.commit((tx) => tx.run(query.insertInto('dirtySystem').values({ systemId: bench.systemId, sinceMs: bench.clock.nowMs() })));
    await bench.alarms.settled();
    await bench.alarms.tick();
    expect(await bench.all()).toEqual(before);
    expect(bench.port.stops.length).toBe(stops);
  });

  it('is over once its window has moved on, and stays latched', async () => {
    await steadyWeek();
    await bench.run({ ml: 1.1 });
    await bench.pass(HOUR + 11 * MINUTE, 10_000);
    const alarm = (await bench.all()).find((one) => one.code === 'volume-hour' && one.limitKind === 'hard');
    expect(alarm).toMatchObject({ active: 0, acknowledged: 0, latched: 1, closedAtMs: null });
  });
});

describe('a late report', () => {
  it('of an overdose in a window that is still open goes off', async () => {
    await steadyWeek();
    const begunMs = bench.clock.nowMs() - 25 * MINUTE;
    await bench.run({ ml: 1.2, begunMs, endedMs: begunMs + 800 });
    expect(await limits()).toContain('volume-hour hard');
  });

  it('of an overdose in windows that have closed is recorded, and neither calls nor stops', async () => {
    await bench.schedule();
    await bench.alarms.start();
    await bench.giveOnTime(bench.clock.nowMs() - 12 * DAY, bench.clock.nowMs());
    const begunMs = bench.clock.nowMs() - 9 * DAY;
    await bench.run({ ml: 5, begunMs, endedMs: begunMs + 800 });
    await bench.alarms.tick();
    expect(await bench.open()).toEqual([]);
    expect(bench.port.stops).toEqual([]);
    const recorded = await bench.all();
    expect(recorded.map((alarm) => alarm.code)).toEqual(
      expect.arrayContaining(['run-too-long', 'volume-day', 'volume-hour', 'volume-week']),
    );
    for (const alarm of recorded) {
      expect(alarm).toMatchObject({ active: 0, acknowledged: 1, latched: 0, closedAtMs: bench.clock.nowMs() });
      expect(evidenceOf(alarm).recordedOnly).toBe(true);
    }
  });

  it('of a whole history records at most one alarm for a code and day', async () => {
    await bench.schedule({ slotMl: 0.1 });
    await bench.alarms.start();
    const nowMs = bench.clock.nowMs();
    await bench.giveOnTime(nowMs - 20 * DAY, nowMs - 12 * DAY, nowMs);
    await bench.alarms.tick();
    const recorded = await bench.all();
    expect(recorded.length).toBeGreaterThan(5);
    const days = recorded.map((alarm) => `${alarm.code} ${Math.floor(alarm.raisedAtMs / DAY)}`);
    expect(new Set(days).size).toBe(days.length);
    await bench.alarms.tick();
    expect(await bench.all()).toEqual(recorded);
  });
});

describe('a restart', () => {
  it('between the commit and its evaluation loses nothing, even hours later', async () => {
    await steadyWeek();
    await bench.alarms.close();
    await bench.run({ ml: 1.2 });
    expect(await bench.all()).toEqual([]);
    bench.clock.advance(3 * HOUR);
    await bench.restart();
    expect((await bench.open()).map((alarm) => `${alarm.code} ${alarm.limitKind} ${alarm.latched}`)).toContain('volume-hour hard 1');
    expect(bench.port.stops.length).toBeGreaterThan(0);
  });

  it('raises nothing again that stood before', async () => {
    await steadyWeek();
    await bench.run({ ml: 1.2 });
    const before = await bench.all();
    const stops = bench.port.stops.length;
    await bench.restart();
    expect(await bench.all()).toEqual(before);
    expect(bench.port.stops.length).toBe(stops);
  });
});

describe('without any schedule', () => {
  it('any pump run passes soft, and a hand dose does not', async () => {
    await bench.alarms.start();
    await bench.handDose(3);
    expect(await bench.all()).toEqual([]);
    await bench.run({ ml: 0.2 });
    expect(await limits()).toEqual(['volume-day soft', 'volume-hour soft', 'volume-week soft']);
  });

  it('a run begun on a stopped head passes hard', async () => {
    await bench.alarms.start();
    await bench.commit((tx) => bench.port.stopHeads(tx, { ...anyStop(), nowMs: bench.clock.nowMs() - HOUR }));
    bench.port.stops.length = 0;
    await bench.run({ ml: 0.2 });
    expect(await limits()).toContain('volume-hour hard');
    expect(bench.port.stops.length).toBeGreaterThan(0);
  });

  it('a number set by the keeper holds', async () => {
    await bench.alarms.start();
    const body = { target: 'system', enabled: true, soft: 1, hard: 2 };
    await bench.alarms.rules.put(bench.systemId, 'volume-day', body, { userId: bench.userId, role: 'keeper' });
    await bench.handDose(2.5);
    expect(await limits()).toEqual(['volume-day hard', 'volume-day soft']);
  });
});

const anyStop = () => ({ siteId: bench.siteId, systemId: bench.systemId, cause: 'interlock' as const, alarmId: 'x', headConcerned: null });
