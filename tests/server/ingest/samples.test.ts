import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type IngestScene, openIngestScene } from '../../helpers/ingest-scene.ts';
import { rollupsFromRaw, storedRollups } from '../../helpers/rollup-oracle.ts';

let scene: IngestScene;
const nowMs = Date.parse('2026-03-01T12:00:00Z');
const nowSeconds = nowMs / 1000;

beforeEach(async () => {
  scene = await openIngestScene();
});

afterEach(() => scene.close());

const samples = () => scene.core.reader.selectFrom('sample').select(['tMs', 'value', 'lagMs']).orderBy('tMs').execute();
const series = () => scene.core.reader.selectFrom('series').selectAll().orderBy('key').execute();
const changes = (type: 'samples' | 'plan') => scene.core.reader.selectFrom('change').selectAll().where('type', '=', type).execute();
const temperature = (v: number, t: number) => [{ n: 'water', u: 'Cel', v, t }];

describe('a SenML pack', () => {
  it('becomes samples with the lag between the device and us, and a series that says what it is', async () => {
    await scene.send('senml', [
      { bn: `${scene.deviceId}:`, bt: nowSeconds - 20, n: 'water', u: 'K', v: 298.25 },
      { n: 'water', u: 'Cel', v: 25.2, t: 10 },
      { n: 'orp', u: 'V', v: 0.41 },
    ]);
    expect(scene.outcome()).toBe('stored');
    expect(await series()).toMatchObject([
      { channel: 'water', quantity: 'temperature', unit: 'degC', lastMs: nowMs - 10_000, lastValue: 25.2 },
      { channel: 'orp', quantity: 'orp', unit: 'mV', lastMs: nowMs - 20_000, lastValue: 410 },
    ]);
    expect(await samples()).toEqual([
      { tMs: nowMs - 20_000, value: 25.1, lagMs: 20_000 },
      { tMs: nowMs - 20_000, value: 410, lagMs: 20_000 },
      { tMs: nowMs - 10_000, value: 25.2, lagMs: 10_000 },
    ]);
  });

  it('names the channel without the device, as its id or its URN (RFC 9039)', async () => {
    await scene.send('senml', [
      { n: `${scene.deviceId}:a`, v: 1 },
      { n: 'urn:dev:ow:10e2073a01080063:b', v: 1 },
      { n: 'urn:dev:ow:10e2073a01080063', v: 1 },
      { n: 'sump/c:d', v: 1 },
    ]);
    expect((await series()).map((row) => row.channel)).toEqual(['a', 'b', 'urn:dev:ow:10e2073a01080063', 'sump/c:d']);
  });

  it('takes the time of arrival where a record has none', async () => {
    await scene.send('senml', [{ n: 'water', u: 'Cel', v: 25 }]);
    expect(await samples()).toEqual([{ tMs: nowMs, value: 25, lagMs: 0 }]);
  });

  it('rounds times to the millisecond', async () => {
    await scene.send('senml', temperature(25, 1_772_000_000.0016));
    expect((await samples())[0]?.tMs).toBe(1_772_000_000_002);
  });

  it('is nothing when it comes again', async () => {
    await scene.send('senml', temperature(25, nowSeconds));
    const rollups = await storedRollups(scene.core);
    await scene.send('senml', temperature(25, nowSeconds));
    expect(scene.outcome()).toBe('nothing-new');
    expect(await samples()).toHaveLength(1);
    expect(await storedRollups(scene.core)).toEqual(rollups);
    expect(await changes('samples')).toHaveLength(1);
  });

  it('keeps the first of two values for one moment, and counts and lists the other', async () => {
    await scene.send('senml', temperature(25, nowSeconds));
    await scene.send('senml', temperature(26, nowSeconds));
    expect(await samples()).toMatchObject([{ value: 25 }]);
    expect(await series()).toMatchObject([{ conflicts: 1, lastValue: 25 }]);
    expect(await scene.core.reader.selectFrom('sampleConflict').selectAll().execute()).toMatchObject([
      { tMs: nowMs, keptValue: 25, otherValue: 26, receivedMs: nowMs },
    ]);
  });

  it('counts the fields that are not kept, each by its name', async () => {
    await scene.send('senml', [
      { n: 'label', vs: 'x' },
      { n: 'open', vb: true },
      { n: 'open', vb: false },
      { n: 'data', vd: 'aGkgCg' },
      { n: 'energy', s: 3 },
      { n: 'water', u: 'Cel', v: 25, s: 3 },
    ]);
    expect(await scene.core.reader.selectFrom('ignoredField').select(['field', 'count']).orderBy('field').execute()).toEqual([
      { field: 's', count: 1 },
      { field: 'vb', count: 2 },
      { field: 'vd', count: 1 },
      { field: 'vs', count: 1 },
    ]);
    expect(await series()).toHaveLength(1);
  });

  it('tells browsers of what is new, and not of history that is uploaded', async () => {
    await scene.send('senml', [
      { n: 'water', u: 'Cel', v: 24, t: nowSeconds - 86_400 },
      { n: 'water', u: 'Cel', v: 25, t: nowSeconds - 20 },
      { n: 'water', u: 'Cel', v: 26, t: nowSeconds - 10 },
    ]);
    const [row] = await series();
    expect((await changes('samples')).map((change) => JSON.parse(change.payload))).toEqual([
      { seriesId: row?.id, t: [nowMs - 20_000, nowMs - 10_000], v: [25, 26] },
    ]);
  });

  it('corrects the roll-ups when samples come late and out of order', async () => {
    const moments = [0, 50, 10, 3_000, 2_990, 5, 86_390, 43_200, 61, 59, 899, 901];
    for (const [index, before] of moments.entries()) await scene.send('senml', temperature(20 + index / 8, nowSeconds - before));
    expect(await storedRollups(scene.core)).toEqual(await rollupsFromRaw(scene.core));
    expect((await series())[0]).toMatchObject({ lastMs: nowMs, lastValue: 20 });
  });

  it('keeps the minute level for 30 days only', async () => {
    await scene.send('senml', [...temperature(25, nowSeconds - 31 * 86_400), ...temperature(26, nowSeconds)]);
    const levels = (await storedRollups(scene.core)).map((row) => [row.levelMs, row.last]);
    expect(levels).toEqual([
      [60_000, 26],
      [900_000, 25],
      [900_000, 26],
      [3_600_000, 25],
      [3_600_000, 26],
    ]);
  });
});

describe('a pack that does not fit', () => {
  it.each([
    ['dated 2019', [{ n: 'water', u: 'Cel', v: 25, t: Date.UTC(2019, 11, 31, 23, 59) / 1000 }], 'too-early'],
    ['dated tomorrow', [{ n: 'water', u: 'Cel', v: 25, t: nowSeconds + 86_400 }], 'too-far-ahead'],
    ['dated a little over 10 minutes ahead', [{ n: 'water', u: 'Cel', v: 25, t: nowSeconds + 601 }], 'too-far-ahead'],
    ['older than samples are kept', [{ n: 'water', u: 'Cel', v: 25, t: nowSeconds - 401 * 86_400 }], 'too-old'],
    ['with a field that must be understood', [{ n: 'water', v: 1, x_: 1 }], 'must-understand'],
    ['of a version to come', [{ bver: 11, n: 'water', v: 1 }], 'unsupported-version'],
    ['with a channel name over 64 characters', [{ n: 'a'.repeat(65), v: 1 }], 'bad-channel'],
    ['with a value beyond anything', [{ n: 'water', u: 'Cel', v: 1e200 }], 'out-of-range'],
    ['that is an object', { n: 'water', v: 1 }, 'wrong-shape'],
  ])('is refused whole when it is %s', async (_name, bad, reason) => {
    const pack = Array.isArray(bad) ? [...temperature(25, nowSeconds), ...bad] : bad;
    await scene.send('senml', pack);
    expect(scene.outcome()).toBe(`refused:${reason}`);
    expect(await samples()).toEqual([]);
    expect(await scene.core.reader.selectFrom('reject').selectAll().execute()).toMatchObject([
      { deviceId: scene.deviceId, topic: scene.topic('senml'), reason, payload: JSON.stringify(pack), receivedMs: nowMs },
    ]);
  });

  it.each([
    ['broken JSON', '[{"n":"water","v":25}', 'not-json'],
    ['NaN', '[{"n":"water","v":NaN}]', 'not-json'],
    ['a number that overflows', '[{"n":"water","v":1e999}]', 'not-finite'],
    ['nothing at all', '', 'not-json'],
    ['over 64 KiB', JSON.stringify(Array.from({ length: 4_000 }, (_, index) => ({ n: 'water', v: index }))), 'too-big'],
  ])('is refused when it is %s', async (_name, text, reason) => {
    await scene.send('senml', text);
    expect(scene.outcome()).toBe(`refused:${reason}`);
    expect(await scene.core.reader.selectFrom('rejectCount').selectAll().execute()).toMatchObject([{ reason, count: 1, lastMs: nowMs }]);
  });

  it('never stops the messages after it', async () => {
    await Promise.all([scene.send('senml', 'no'), scene.send('senml', temperature(25, nowSeconds))]);
    expect(await samples()).toHaveLength(1);
  });

  it('is refused when it would be the 101st channel, and the 100 before stay', async () => {
    await scene.send(
      'senml',
      Array.from({ length: 100 }, (_, index) => ({ n: `c${index}`, v: 1 })),
    );
    await scene.send('senml', [
      { n: 'c0', v: 2, t: nowSeconds - 1 },
      { n: 'c100', v: 2, t: nowSeconds - 1 },
    ]);
    expect(scene.outcome()).toBe('refused:too-many-channels');
    expect(await samples()).toHaveLength(100);
  });

  it('is refused when a channel comes in a unit that its values are not kept in', async () => {
    await scene.send('senml', [{ n: 'battery', u: 'V', v: 3.1 }]);
    await scene.send('senml', [{ n: 'battery', u: '%EL', v: 80 }]);
    expect(scene.outcome()).toBe('refused:unit-changed');
  });

  it('is kept with the newest 200 of its device, and counted without bound', async () => {
    await Promise.all(Array.from({ length: 230 }, (_, index) => scene.send('senml', `broken ${index}`)));
    const rejects = await scene.core.reader.selectFrom('reject').select('payload').orderBy('seq').execute();
    expect(rejects).toHaveLength(200);
    expect(rejects[0]?.payload).toBe('broken 30');
    expect(await scene.core.reader.selectFrom('rejectCount').select('count').execute()).toEqual([{ count: 230 }]);
  });
});

describe('the newest raw messages', () => {
  it('are at most 50 a device, newest first, with what became of them', async () => {
    for (let index = 0; index < 55; index++) await scene.send('senml', index === 54 ? 'no' : temperature(20, nowSeconds - index));
    const recent = scene.ingest.recentMessages(scene.deviceId);
    expect(recent).toHaveLength(50);
    expect(recent[0]).toMatchObject({ topic: scene.topic('senml'), bytes: 2, payload: 'no', outcome: 'refused:not-json' });
    expect(recent[1]?.outcome).toBe('stored');
  });
});

it('acknowledges the messages of a device that was removed, and keeps nothing of them', async () => {
  await scene.send('senml', temperature(25, nowSeconds), { deviceId: '0195f1f5-0000-7000-8000-000000000000' });
  expect(await samples()).toEqual([]);
});

it('rejects, so that nothing is acknowledged, when the message cannot be stored', async () => {
  await scene.core.writer.close();
  await expect(scene.send('senml', temperature(25, nowSeconds))).rejects.toThrow('closed');
  expect(scene.outcome()).toBe('failed');
});
