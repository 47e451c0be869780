import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Household, startTestServer, type TestPerson, type TestServer } from '../../helpers/server.ts';

let server: TestServer;
let home: Household;
let sitter: TestPerson;
let deviceId: string;
let alarmId: string;

beforeAll(async () => {
  server = await startTestServer();
  home = await server.household();
  sitter = await server.member(home.siteId, 'sitter');
  const params = { systemId: home.systemId };
  const made = await home.owner.api('createDevice', { params, body: { name: 'Pump', kind: 'pump' } });
  deviceId = made.device.id;
  await home.owner.api('putRule', { params: { ...params, code: 'volume-day' }, body: { soft: 2, hard: 3 } });
  await dose('first', 3.5);
  alarmId = await hardAlarm();
});

afterAll(() => server.close());

/** A run as it comes from the broker, evaluated when this resolves. */
async function dose(run: string, ml: number): Promise<void> {
  const nowMs = Date.now();
  const payload = { run, head: 1, phase: 'ended', atMs: nowMs, ml, cause: 'button' };
  await server.context.ingest.receive({
    deviceId,
    word: 'run',
    payload: Buffer.from(JSON.stringify(payload)),
    receivedMs: nowMs,
    isWill: false,
  });
  await server.context.alarms.settled();
}

async function hardAlarm(): Promise<string> {
  const { items } = await sitter.api('listSystemAlarms', { params: { systemId: home.systemId } });
  const found = items.find((alarm) => alarm.code === 'volume-day' && alarm.limitKind === 'hard');
  if (found === undefined) throw new Error(`no hard alarm among ${items.map((alarm) => alarm.code).join(', ')}`);
  return found.id;
}

describe('an alarm over the API', () => {
  it('is listed for its system and among all of a person, and not for somebody else', async () => {
    const all = await sitter.api('listAlarms');
    expect(all.items.map((alarm) => alarm.id)).toContain(alarmId);
    const stranger = await server.person();
    expect((await stranger.api('listAlarms')).items).toEqual([]);
    expect(await stranger.api.problem('getAlarm', { params: { alarmId } })).toMatchObject({ status: 404 });
  });

  it('is acknowledged by a sitter, who cannot reset or shelve it', async () => {
    expect(await sitter.api('acknowledge', { params: { alarmId } })).toMatchObject({ state: 'acknowledged', latched: true });
    expect(await sitter.api.problem('reset', { params: { alarmId }, body: { cause: 'looks fine to me' } })).toMatchObject({ status: 403 });
    const until = new Date(Date.now() + 60_000).toISOString();
    expect(await sitter.api.problem('shelve', { params: { alarmId }, body: { until, reason: 'too loud' } })).toMatchObject({ status: 403 });
  });

  it('is taken with a time of arrival', async () => {
    const arriveAt = new Date(Date.now() + 20 * 60_000).toISOString();
    expect(await sitter.api('take', { params: { alarmId }, body: { arriveAt } })).toMatchObject({ taken: { userId: sitter.id, arriveAt } });
  });

  it('is refused a shelf that is too long, with the path that is wrong', async () => {
    const until = new Date(Date.now() + 9 * 3_600_000).toISOString();
    const problem = await home.owner.api.problem('shelve', { params: { alarmId }, body: { until, reason: 'on my way' } });
    expect(problem).toMatchObject({ status: 422, errors: [{ path: 'until' }] });
  });

  it('is reset by the owner with its cause, which its log keeps', async () => {
    const reset = await home.owner.api('reset', { params: { alarmId }, body: { cause: 'The button stuck' } });
    expect(reset).toMatchObject({ state: 'acknowledged', latched: false, active: true });
    const { transitions } = await sitter.api('getAlarm', { params: { alarmId } });
    expect(transitions[0]).toMatchObject({ action: 'reset', reason: 'The button stuck', actorKind: 'user' });
  });

  it('is found by its state', async () => {
    const params = { systemId: home.systemId };
    const acknowledged = await sitter.api('listSystemAlarms', { params, query: { state: 'acknowledged' } });
    expect(acknowledged.items.map((alarm) => alarm.id)).toContain(alarmId);
    expect((await sitter.api('listSystemAlarms', { params, query: { state: 'normal' } })).items).toEqual([]);
  });

  it('is listed page by page', async () => {
    const params = { systemId: home.systemId };
    const whole = await sitter.api('listSystemAlarms', { params });
    const first = await sitter.api('listSystemAlarms', { params, query: { limit: 1 } });
    expect(first.items).toEqual(whole.items.slice(0, 1));
    const second = await sitter.api('listSystemAlarms', { params, query: { limit: 1, cursor: first.next ?? '' } });
    expect(second.items).toEqual(whole.items.slice(1, 2));
  });
});

describe('a rule over the API', () => {
  const put = (person: TestPerson, body: object, code = 'volume-day') =>
    person.api.problem('putRule', { params: { systemId: home.systemId, code }, body });

  it('is listed with what holds now', async () => {
    const { items } = await sitter.api('listRules', { params: { systemId: home.systemId } });
    expect(items.find((rule) => rule.code === 'volume-day')).toMatchObject({ soft: 2, hard: 3, effectiveHard: 3, current: 3.5 });
  });

  it('is refused at 0, and with soft at hard', async () => {
    expect(await put(home.owner, { hard: 0 })).toMatchObject({ status: 422, errors: [{ path: 'hard' }] });
    expect(await put(home.owner, { soft: 3, hard: 3 })).toMatchObject({ status: 422, errors: [{ path: 'soft' }] });
  });

  it('is not changed by a sitter, and loses its interlock only by an owner', async () => {
    expect(await put(sitter, { soft: 2, hard: 4 })).toMatchObject({ status: 403 });
    const keeper = await server.member(home.siteId, 'keeper');
    expect(await put(keeper, { soft: 2, hard: 4, interlock: false })).toMatchObject({ status: 409, rule: 'interlock-owner-only' });
  });

  it('of a code that does not exist is not found', async () => {
    expect(await put(home.owner, {}, 'volume-year')).toMatchObject({ status: 404 });
  });
});
