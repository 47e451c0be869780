import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { alarmSchema } from '../../../shared/contract/alarms.ts';
import { BadInputError, NotFoundError, RuleError } from '../../../server/errors.ts';
import { query } from '../../../server/db/open.ts';
import { type Bench, DAY, HOUR, openBench } from './alarm-bench.ts';

let bench: Bench;
let alarmId: string;

const other = '0190f3a2-0000-7000-8000-000000000002';

/** A planned week and one hand dose that passes hard of the hour and nothing else hard. */
beforeEach(async () => {
  bench = await openBench();
  await bench.schedule();
  await bench.giveOnTime(bench.clock.nowMs() - 8 * DAY, bench.clock.nowMs());
  await bench.alarms.start();
  await bench.commit((tx) =>
    tx.run(query.insertInto('user').values({ id: other, email: 'sitter@bench.example', name: 'Sitter', passwordHash: '', createdAtMs: 0 })),
  );
  await bench.handDose(1.1);
  alarmId = await idOf('volume-hour', 'hard');
});

afterEach(() => bench.close());

async function idOf(code: string, limitKind: string): Promise<string> {
  const alarm = (await bench.open()).find((one) => one.code === code && one.limitKind === limitKind);
  if (alarm === undefined) throw new Error(`${code} ${limitKind} did not go off`);
  return alarm.id;
}

const log = async () =>
  (await bench.alarms.get(alarmId)).transitions.map((step) => `${step.action}: ${step.stateBefore} > ${step.stateAfter}`);

describe('acknowledging', () => {
  it('changes the state, and the second person gets what the first did', async () => {
    const [first, second] = await Promise.all([bench.alarms.acknowledge(alarmId, bench.userId), bench.alarms.acknowledge(alarmId, other)]);
    expect(first).toMatchObject({ state: 'acknowledged', acknowledged: true, latched: true, active: true });
    expect(second).toEqual(first);
    expect(await log()).toEqual(['acknowledge: unacknowledged > acknowledged', 'occur: normal > unacknowledged']);
    expect((await bench.alarms.get(alarmId)).transitions[0]).toMatchObject({ actorKind: 'user', actorName: 'Keeper' });
  });

  it('leaves the latch, so that a sitter can answer the call and the pumps stay stopped', async () => {
    await bench.alarms.acknowledge(alarmId, other);
    await bench.pass(HOUR + 11 * 60_000, 60_000);
    expect((await bench.alarms.get(alarmId)).alarm).toMatchObject({ state: 'latched', active: false });
  });

  it('of an alarm that is not there says so', async () => {
    await expect(bench.alarms.acknowledge(other, bench.userId)).rejects.toThrow(NotFoundError);
  });
});

describe('taking', () => {
  it('shows all who is on it and when they arrive', async () => {
    const arriveAtMs = bench.clock.nowMs() + 20 * 60_000;
    const taken = await bench.alarms.take(alarmId, other, arriveAtMs);
    expect(taken.taken).toEqual({ userId: other, name: 'Sitter', arriveAt: new Date(arriveAtMs).toISOString() });
    expect(taken.state).toBe('unacknowledged');
    const late = await bench.alarms.take(alarmId, bench.userId, arriveAtMs + 1000);
    expect(late).toEqual(taken);
  });

  it('passes to another person when the first did not come', async () => {
    await bench.alarms.take(alarmId, other, bench.clock.nowMs() + 60_000);
    bench.clock.advance(120_000);
    const taken = await bench.alarms.take(alarmId, bench.userId, bench.clock.nowMs() + 60_000);
    expect(taken.taken?.userId).toBe(bench.userId);
  });

  it('refuses a time that is past or more than a day away', async () => {
    await expect(bench.alarms.take(alarmId, other, bench.clock.nowMs() - HOUR)).rejects.toThrow(BadInputError);
    await expect(bench.alarms.take(alarmId, other, bench.clock.nowMs() + 2 * DAY)).rejects.toThrow(BadInputError);
  });
});

describe('shelving', () => {
  it('keeps an interlock quiet for at most 8 h, and another alarm for at most 7 days', async () => {
    const nowMs = bench.clock.nowMs();
    await expect(bench.alarms.shelve(alarmId, bench.userId, nowMs + 8 * HOUR + 1, 'looking into it')).rejects.toThrow('8 hours');
    const shelved = await bench.alarms.shelve(alarmId, bench.userId, nowMs + 8 * HOUR, 'looking into it');
    expect(shelved).toMatchObject({ state: 'shelved', shelvedUntil: new Date(nowMs + 8 * HOUR).toISOString(), latched: true });
    const soft = await idOf('volume-hour', 'soft');
    await expect(bench.alarms.shelve(soft, bench.userId, nowMs + 7 * DAY + 1, 'known')).rejects.toThrow('7 days');
    expect(await bench.alarms.shelve(soft, bench.userId, nowMs + 7 * DAY, 'known')).toMatchObject({ state: 'shelved' });
  });

  it('refuses a time that is past', async () => {
    await expect(bench.alarms.shelve(alarmId, bench.userId, bench.clock.nowMs(), 'too late')).rejects.toThrow(BadInputError);
  });

  it('ends by itself, and calls again while the value is still over', async () => {
    await bench.alarms.acknowledge(alarmId, bench.userId);
    await bench.alarms.shelve(alarmId, bench.userId, bench.clock.nowMs() + 10 * 60_000, 'quiet please');
    await bench.pass(9 * 60_000, 60_000);
    expect((await bench.alarms.get(alarmId)).alarm.state).toBe('shelved');
    await bench.pass(60_000, 30_000);
    expect((await bench.alarms.get(alarmId)).alarm.state).toBe('unacknowledged');
  });

  it('never keeps an interlock from stopping', async () => {
    await bench.alarms.reset(alarmId, bench.userId, 'Somebody dosed by hand');
    await bench.alarms.shelve(alarmId, bench.userId, bench.clock.nowMs() + HOUR, 'quiet please');
    const stops = bench.port.stops.length;
    await bench.handDose(0.5);
    expect(bench.port.stops.length).toBe(stops + 1);
    expect((await bench.alarms.get(alarmId)).alarm).toMatchObject({ state: 'shelved', latched: true });
  });
});

describe('resetting', () => {
  it('works while the value is still over, starts nothing, and trips again only by more volume', async () => {
    const reset = await bench.alarms.reset(alarmId, bench.userId, 'Somebody dosed by hand');
    expect(reset).toMatchObject({ state: 'acknowledged', latched: false, active: true });
    const stops = bench.port.stops.length;
    await bench.pass(30_000, 5_000);
    expect(bench.port.stops.length).toBe(stops);
    expect((await bench.alarms.get(alarmId)).alarm.latched).toBe(false);

    await bench.handDose(0.1);
    expect((await bench.alarms.get(alarmId)).alarm).toMatchObject({ state: 'unacknowledged', latched: true });
    expect(bench.port.stops.length).toBe(stops + 1);
    expect(await log()).toEqual([
      're-alarm: acknowledged > unacknowledged',
      'reset: unacknowledged > acknowledged',
      'occur: normal > unacknowledged',
    ]);
  });

  it('is not undone by a restart', async () => {
    await bench.alarms.reset(alarmId, bench.userId, 'Somebody dosed by hand');
    const stops = bench.port.stops.length;
    await bench.restart();
    await bench.alarms.tick();
    expect(bench.port.stops.length).toBe(stops);
    expect((await bench.alarms.get(alarmId)).alarm.latched).toBe(false);
  });

  it('twice gives the second person the present state', async () => {
    const [first, second] = await Promise.all([
      bench.alarms.reset(alarmId, bench.userId, 'Somebody dosed by hand'),
      bench.alarms.reset(alarmId, other, 'Me too'),
    ]);
    expect(second).toEqual(first);
  });

  it('refuses an alarm that keeps nothing stopped', async () => {
    const soft = await idOf('volume-hour', 'soft');
    await expect(bench.alarms.reset(soft, bench.userId, 'no cause')).rejects.toThrow(RuleError);
  });

  it('ends an alarm that was over, and the next overdose is a new one', async () => {
    await bench.alarms.acknowledge(alarmId, bench.userId);
    await bench.pass(HOUR + 11 * 60_000, 60_000);
    expect(await bench.alarms.reset(alarmId, bench.userId, 'Somebody dosed by hand')).toMatchObject({ state: 'normal' });
    await bench.handDose(1.6);
    expect(await idOf('volume-hour', 'hard')).not.toBe(alarmId);
  });
});

describe('every change', () => {
  it('reaches the browsers in its REST shape, and the audit trail', async () => {
    await bench.alarms.acknowledge(alarmId, bench.userId);
    const changes = await bench.opened.core.reader.selectFrom('change').selectAll().where('type', '=', 'alarm').orderBy('seq').execute();
    const shapes = changes.map((change) => alarmSchema.parse(JSON.parse(change.payload))).filter((alarm) => alarm.id === alarmId);
    expect(shapes.map((alarm) => alarm.state)).toEqual(['unacknowledged', 'acknowledged']);
    const trail = await bench.opened.core.reader.selectFrom('audit').selectAll().where('entityId', '=', alarmId).orderBy('seq').execute();
    expect(trail.map((entry) => `${entry.actorKind} ${entry.action}`)).toEqual(['system occur', 'user acknowledge']);
  });
});

describe('the lists', () => {
  it('hold all but what is over, newest first, or one state', async () => {
    const page = { limit: 50, after: null };
    const open = await bench.alarms.list({ systemId: bench.systemId }, undefined, page);
    expect(open.map((alarm) => `${alarm.code} ${alarm.limitKind}`).sort()).toEqual([
      'volume-day soft',
      'volume-hour hard',
      'volume-hour soft',
    ]);
    await bench.alarms.acknowledge(alarmId, bench.userId);
    expect((await bench.alarms.list({ systemId: bench.systemId }, 'acknowledged', page)).map((alarm) => alarm.id)).toEqual([alarmId]);
    expect(await bench.alarms.list({ systemId: bench.systemId }, 'suppressed', page)).toEqual([]);
    expect(await bench.alarms.list({ systemId: bench.systemId }, 'normal', page)).toEqual([]);
    const second = await bench.alarms.list({ systemId: bench.systemId }, undefined, {
      limit: 50,
      after: { key: open[0]?.raisedAtMs ?? 0, id: open[0]?.id ?? '' },
    });
    expect(second.map((alarm) => alarm.id)).toEqual(open.slice(1).map((alarm) => alarm.id));
  });

  it('over all sites hold only those of sites that one is in', async () => {
    const page = { limit: 50, after: null };
    expect(await bench.alarms.list({ userId: bench.userId }, undefined, page)).toHaveLength(3);
    expect(await bench.alarms.list({ userId: other }, undefined, page)).toEqual([]);
  });
});
