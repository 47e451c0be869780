import { randomUUID } from 'node:crypto';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { alarmRuleBodySchema, alarmRuleSchema } from '../../../shared/contract/alarms.ts';
import type { AlarmCode } from '../../../shared/domain/alarm-codes.ts';
import type { Role } from '../../../shared/domain/role.ts';
import { BadInputError, NotFoundError, RuleError } from '../../../server/errors.ts';
import { type Bench, DAY, openBench } from './alarm-bench.ts';

let bench: Bench;

beforeEach(async () => {
  bench = await openBench();
  await bench.schedule();
  await bench.giveOnTime(bench.clock.nowMs() - 8 * DAY, bench.clock.nowMs());
  await bench.alarms.start();
});

afterEach(() => bench.close());

const put = (code: AlarmCode, body: object, role: Role = 'keeper') =>
  bench.alarms.rules.put(bench.systemId, code, alarmRuleBodySchema.parse(body), { userId: bench.userId, role });

describe('the rules of a system', () => {
  it('are listed with the limits that hold now and what counts against them', async () => {
    const rules = await bench.alarms.rules.list(bench.systemId);
    for (const rule of rules) expect(alarmRuleSchema.parse(rule)).toEqual(rule);
    expect(rules.map((rule) => rule.code)).toEqual(['volume-hour', 'volume-day', 'volume-week', 'run-too-long', 'device-offline']);
    const day = rules.find((rule) => rule.code === 'volume-day');
    expect(day).toMatchObject({
      soft: null,
      hard: null,
      effectiveSoft: 6.6,
      effectiveHard: 7.5,
      unit: 'mL',
      interlock: true,
      isDefault: true,
    });
    expect(day?.current).toBeCloseTo(6, 9);
  });

  it('show volumes without the dust of binary sums', async () => {
    await bench.schedule({ slotMl: 0.1, fromMs: bench.clock.nowMs() - 8 * DAY });
    const rules = await bench.alarms.rules.list(bench.systemId);
    const numbers = rules.flatMap((rule) => [rule.effectiveSoft, rule.effectiveHard, rule.current]).filter((value) => value !== null);
    expect(numbers.length).toBeGreaterThan(6);
    for (const value of numbers) expect(value).toBe(Number(value.toFixed(6)));
  });

  it('cannot tell limits without a schedule', async () => {
    const bare = await openBench();
    const day = (await bare.alarms.rules.list(bare.systemId)).find((rule) => rule.code === 'volume-day');
    expect(day).toMatchObject({ effectiveSoft: null, effectiveHard: null, current: 0 });
    await bare.close();
  });

  it('of a system that does not exist are not found', async () => {
    await expect(bench.alarms.rules.list(randomUUID())).rejects.toThrow(NotFoundError);
  });
});

describe('setting a limit', () => {
  it('takes effect at once, and is kept as a revision and in the audit trail', async () => {
    const rule = await put('volume-day', { soft: 5, hard: 5.5 });
    expect(rule).toMatchObject({
      soft: 5,
      hard: 5.5,
      effectiveSoft: 5,
      effectiveHard: 5.5,
      fromSchedule: { planned: 6, soft: 6.6, hard: 7.5 },
      isDefault: false,
    });
    await bench.alarms.settled();
    expect((await bench.open()).map((alarm) => `${alarm.code} ${alarm.limitKind}`)).toEqual(['volume-day hard', 'volume-day soft']);
    expect(bench.port.stops).toHaveLength(1);
    await put('volume-day', { soft: 7, hard: 8 }, 'owner');
    const revisions = await bench.opened.core.reader.selectFrom('alarmRuleRevision').selectAll().orderBy('revision').execute();
    expect(revisions.map((revision) => revision.revision)).toEqual([1, 2]);
    const trail = await bench.opened.core.reader.selectFrom('audit').selectAll().where('entity', '=', 'alarmRule').execute();
    expect(trail).toHaveLength(2);
  });

  it('twice to the same values changes nothing the second time', async () => {
    const first = await put('volume-day', { soft: 7, hard: 7.4 });
    expect(await put('volume-day', { soft: 7, hard: 7.4 })).toEqual(first);
    const revisions = await bench.opened.core.reader.selectFrom('alarmRuleRevision').select('revision').execute();
    expect(revisions).toHaveLength(1);
  });

  it('back to the plan is the default again', async () => {
    await put('volume-day', { soft: 7, hard: 7.4 });
    expect(await put('volume-day', {})).toMatchObject({ isDefault: true, effectiveSoft: 6.6 });
  });

  it('refuses a soft limit that is not under hard, also where one of them comes from the plan', async () => {
    expect(alarmRuleBodySchema.safeParse({ soft: 8, hard: 8 }).success).toBe(false);
    expect(alarmRuleBodySchema.safeParse({ hard: 0 }).success).toBe(false);
    await expect(put('volume-day', { soft: 7.5 })).rejects.toThrow(/under the hard limit.*7\.5 mL/);
    await expect(put('volume-day', { hard: 6.6 })).rejects.toThrow(/over the soft limit.*6\.6 mL/);
    expect(await put('volume-day', { hard: 6.7 })).toMatchObject({ effectiveSoft: 6.6, effectiveHard: 6.7 });
  });

  it('refuses another unit, a number for a pattern, an interlock that cannot stop anything, and a foreign target', async () => {
    await expect(put('volume-day', { unit: 'L' })).rejects.toThrow(BadInputError);
    await expect(put('device-offline', { soft: 5 })).rejects.toThrow(BadInputError);
    await expect(put('device-offline', { interlock: true })).rejects.toThrow(BadInputError);
    await expect(put('device-offline', { target: `device:${randomUUID()}` })).rejects.toThrow(BadInputError);
    await expect(put('volume-day', { target: `head:${bench.headId}` })).rejects.toThrow(BadInputError);
    await expect(put('run-too-long', { target: 'elsewhere' })).rejects.toThrow(BadInputError);
    expect(await put('run-too-long', { target: `head:${bench.headId}` })).toMatchObject({ target: `head:${bench.headId}` });
  });

  it('for one device leaves the others as they were', async () => {
    await put('device-offline', { target: `device:${bench.pumpId}`, onDelaySeconds: 60 });
    const rules = (await bench.alarms.rules.list(bench.systemId)).filter((rule) => rule.code === 'device-offline');
    expect(rules.map((rule) => `${rule.target} ${rule.onDelaySeconds}`)).toEqual(['system 10', `device:${bench.pumpId} 60`]);
  });
});

describe('an interlock', () => {
  it('keeps its teeth unless an owner draws them', async () => {
    for (const body of [{ interlock: false }, { enabled: false }, { onDelaySeconds: 60 }, { priority: 'low' }]) {
      await expect(put('volume-day', body)).rejects.toThrow(RuleError);
      await expect(put('run-too-long', body)).rejects.toThrow(/Only an owner/);
    }
    expect(await put('volume-day', { interlock: false }, 'owner')).toMatchObject({ interlock: false });
  });

  it('takes no hard limit above the one that the plan and the label give, unless from an owner', async () => {
    await expect(put('volume-day', { hard: 7.51 })).rejects.toMatchObject({
      rule: 'interlock-owner-only',
      message: expect.stringContaining('7.5 mL') as string,
    });
    expect(await put('volume-day', { hard: 7.5 })).toMatchObject({ effectiveHard: 7.5 });
    // As a screen shows it, in hundredths.
    expect(await put('volume-day', { hard: 7.504 })).toMatchObject({ hard: 7.504 });
    await put('volume-day', { hard: 9 }, 'owner');
    expect(await put('volume-day', { hard: 9, offDelaySeconds: 5 })).toMatchObject({ hard: 9, offDelaySeconds: 5 });
    await expect(put('volume-day', { hard: 9.5 })).rejects.toMatchObject({ rule: 'interlock-owner-only' });
  });

  it('is held to the label where there is no plan', async () => {
    const bare = await openBench();
    const by = { userId: bare.userId, role: 'keeper' } as const;
    const set = (code: AlarmCode, hard: number) => bare.alarms.rules.put(bare.systemId, code, alarmRuleBodySchema.parse({ hard }), by);
    // 2 mL per 100 L and day in 420 L, and a quarter more.
    await expect(set('volume-day', 10.6)).rejects.toMatchObject({ rule: 'interlock-owner-only' });
    expect(await set('volume-day', 10.5)).toMatchObject({ hard: 10.5 });
    await expect(set('volume-week', 73.6)).rejects.toMatchObject({ rule: 'interlock-owner-only' });
    expect(await set('volume-hour', 50)).toMatchObject({ hard: 50 });
    await bare.close();
  });

  it('takes no deadband above a tenth of its hard limit, unless from an owner', async () => {
    await expect(put('volume-day', { deadband: 0.76 })).rejects.toMatchObject({
      rule: 'interlock-owner-only',
      message: expect.stringContaining('0.75 mL') as string,
    });
    expect(await put('volume-day', { deadband: 0.75 })).toMatchObject({ deadband: 0.75 });
    await expect(put('volume-day', { soft: 4, hard: 5, deadband: 0.75 })).rejects.toMatchObject({ rule: 'interlock-owner-only' });
    expect(await put('volume-day', { deadband: 3 }, 'owner')).toMatchObject({ deadband: 3 });
  });

  it('that an owner switched off goes off without stopping anything', async () => {
    await put('volume-hour', { interlock: false }, 'owner');
    await bench.handDose(1.1);
    const hard = (await bench.open()).find((alarm) => alarm.code === 'volume-hour' && alarm.limitKind === 'hard');
    expect(hard).toMatchObject({ active: 1, latched: 0, interlock: 0 });
    expect(bench.port.stops).toEqual([]);
  });

  it('can be switched on again by a keeper', async () => {
    await put('volume-day', { interlock: false }, 'owner');
    expect(await put('volume-day', {})).toMatchObject({ interlock: true });
  });
});

describe('a rule that is switched off', () => {
  it('raises nothing, and what stood of it returns', async () => {
    await bench.handDose(1.1);
    await put('volume-hour', { enabled: false }, 'owner');
    await bench.alarms.settled();
    const hour = (await bench.open()).filter((alarm) => alarm.code === 'volume-hour');
    expect(hour.map((alarm) => `${alarm.limitKind} ${alarm.active} ${alarm.latched}`)).toEqual(['hard 0 1', 'soft 0 0']);
    await bench.handDose(3);
    expect((await bench.open()).filter((alarm) => alarm.code === 'volume-hour' && alarm.active === 1)).toEqual([]);
  });
});
