import { uuidv7 } from 'uuidv7';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type IngestScene, openIngestScene } from '../../helpers/ingest-scene.ts';
import { addSystemRow, insertRow } from '../../helpers/rows.ts';

let scene: IngestScene;
const nowMs = Date.parse('2026-03-01T12:00:00Z');
const hourMs = 3_600_000;
const heard: string[] = [];

beforeEach(async () => {
  heard.length = 0;
  scene = await openIngestScene({ onRun: (_tx, _device, run) => void heard.push(`${run.run} ${run.ml}`) });
});

afterEach(() => scene.close());

const step = (more: object) => ({ run: 'r1', head: 1, phase: 'ended', atMs: nowMs, ml: 0.5, cause: 'button', ...more });
const send = (more: object) => scene.send('run', step(more));
const runs = () => scene.core.reader.selectFrom('run').selectAll().orderBy('run').execute();
const ledger = () => scene.core.reader.selectFrom('doseLedger').selectAll().orderBy('seq').execute();
const givenMl = async () => (await ledger()).reduce((sum, row) => sum + row.deltaMl, 0);

async function assign(use: {
  fromMs: number;
  toMs?: number | null;
  kind?: 'carbon' | 'other';
  productId?: string | null;
  systemId?: string;
  headId?: string;
}) {
  const headId = use.headId ?? uuidv7();
  const { siteId, deviceId } = scene;
  if (use.headId === undefined) await insertRow(scene.core, 'head', { id: headId, siteId, deviceId, head: 1, createdAtMs: 0 });
  await insertRow(scene.core, 'headAssignment', {
    id: uuidv7(),
    siteId,
    headId,
    systemId: use.systemId ?? scene.systemId,
    kind: use.kind ?? 'carbon',
    productId: use.productId ?? null,
    reservoirId: null,
    mlPerSecond: 1,
    smallestMl: 0.1,
    fromMs: use.fromMs,
    toMs: use.toMs ?? null,
    actorId: 'keeper',
  });
  return headId;
}

async function addProduct(revisions: { fromMs: number; oxygenDemandMgPerMl: number | null }[]) {
  const { siteId } = scene;
  const productId = uuidv7();
  await insertRow(scene.core, 'product', { id: productId, siteId, name: 'Carbon blend A', form: 'liquid', createdAtMs: 0 });
  const ids: string[] = [];
  for (const { fromMs, oxygenDemandMgPerMl } of revisions) {
    const id = uuidv7();
    ids.push(id);
    const label = { labelMl: null, labelMaxMl: null, labelPerLitres: null, labelPerDays: null };
    await insertRow(scene.core, 'productRevision', {
      id,
      productId,
      siteId,
      composition: '[]',
      ...label,
      oxygenDemandMgPerMl,
      carbonMgPerMl: null,
      fromMs,
      actorId: 'keeper',
    });
  }
  return { productId, ids };
}

describe('the steps of a run', () => {
  it('count once, whatever their order and however often they repeat', async () => {
    const begun = step({ phase: 'begun', ml: 0, atMs: nowMs - 5_000 });
    const running = step({ phase: 'running', ml: 0.3, atMs: nowMs - 3_000 });
    const ended = step({ phase: 'ended', ml: 0.5, atMs: nowMs - 1_000 });
    for (const message of [running, ended, begun, ended, running, begun]) await scene.send('run', message);
    expect(await runs()).toMatchObject([{ run: 'r1', begunMs: nowMs - 5_000, endedMs: nowMs - 1_000, ml: 0.5, flags: '[]' }]);
    expect((await ledger()).map((row) => [row.step, row.deltaMl])).toEqual([
      [0, 0.3],
      [1, 0.2],
    ]);
    expect(heard).toEqual(['r1 0.3', 'r1 0.5', 'r1 0.5']);
  });

  it('are complete with an end alone', async () => {
    await send({ ml: 1.5, begunMs: nowMs - 4_000, onMs: 1_500, odometerMl: 100.5, odometerEpoch: 2, atMs: nowMs - 2_000 });
    expect(await runs()).toMatchObject([
      { begunMs: nowMs - 4_000, begunReceivedMs: null, endedMs: nowMs - 2_000, ml: 1.5, onMs: 1_500, odometerMl: 100.5, odometerEpoch: 2 },
    ]);
    expect(await ledger()).toMatchObject([{ atMs: nowMs - 2_000, deltaMl: 1.5, receivedMs: nowMs }]);
  });

  it('keep the first of two ends on record, and count the larger volume', async () => {
    await send({ ml: 0.5 });
    await send({ ml: 0.8, atMs: nowMs + 1_000 });
    await send({ ml: 0.6, atMs: nowMs + 2_000 });
    const [run] = await runs();
    expect(run).toMatchObject({ endedMs: nowMs, ml: 0.8, flags: '["second-ended"]' });
    expect(JSON.parse(run?.endedPayload ?? '')).toMatchObject({ ml: 0.5, atMs: nowMs });
    expect(await givenMl()).toBeCloseTo(0.8, 12);
  });

  it('that disagree about head or cause are flagged, and the first stays', async () => {
    await send({ phase: 'begun', ml: 0 });
    await send({ head: 2, cause: 'prime' });
    expect(await runs()).toMatchObject([{ head: 1, cause: 'button', ml: 0.5, flags: '["steps-differ"]' }]);
  });

  it('tell of an interruption', async () => {
    await send({ phase: 'begun', ml: 0 });
    await send({ ml: 0.2, interrupted: true });
    expect(await runs()).toMatchObject([{ interrupted: 1, ml: 0.2 }]);
  });

  it('belong to their device: two pumps may use one run id', async () => {
    await send({});
    const other = uuidv7();
    await insertRow(scene.core, 'device', {
      id: other,
      siteId: scene.siteId,
      systemId: scene.systemId,
      name: 'Other',
      kind: 'pump',
      secretHash: '',
      credentialVersion: 1,
      createdAtMs: 0,
    });
    await scene.send('run', step({ ml: 0.7 }), { deviceId: other });
    expect(await runs()).toHaveLength(2);
    expect(await givenMl()).toBeCloseTo(1.2, 12);
  });

  it('reach the browser in the shape of the API', async () => {
    await send({ cause: 'schedule', dueMs: nowMs - 1_000, scheduleVersion: 3, begunMs: nowMs - 900 });
    const changes = await scene.core.reader.selectFrom('change').selectAll().where('type', '=', 'run').execute();
    expect(changes.map((change) => JSON.parse(change.payload))).toEqual([
      {
        id: 'r1',
        deviceId: scene.deviceId,
        headId: null,
        head: 1,
        kind: 'carbon',
        beganAt: '2026-03-01T11:59:59.100Z',
        endedAt: '2026-03-01T12:00:00.000Z',
        ml: 0.5,
        cause: 'schedule',
        dueAt: '2026-03-01T11:59:59.000Z',
        interrupted: false,
        flags: [],
      },
    ]);
    expect(await scene.core.reader.selectFrom('dirtySystem').select('systemId').execute()).toEqual([{ systemId: scene.systemId }]);
  });
});

describe('when a run counts', () => {
  it('is its due time for a portion of the schedule', async () => {
    await send({ cause: 'schedule', dueMs: nowMs - 20_000, begunMs: nowMs - 10_000 });
    expect(await ledger()).toMatchObject([{ atMs: nowMs - 20_000 }]);
  });

  it('is its own time where it did not begin when it claims to have been due', async () => {
    await send({ cause: 'schedule', dueMs: nowMs - 6 * hourMs, begunMs: nowMs - 10_000 });
    expect(await ledger()).toMatchObject([{ atMs: nowMs }]);
    expect(await runs()).toMatchObject([{ dueMs: nowMs - 6 * hourMs, flags: '["due-off"]' }]);
  });

  it('is never a due time that is no time', async () => {
    await send({ cause: 'schedule', dueMs: 3 });
    expect(await runs()).toMatchObject([{ dueMs: null, flags: '["due-off"]' }]);
    expect(await ledger()).toMatchObject([{ atMs: nowMs }]);
  });

  it('is its own time for everything else', async () => {
    await send({ cause: 'prime', dueMs: nowMs - 20_000, atMs: nowMs - hourMs });
    expect(await ledger()).toMatchObject([{ atMs: nowMs - hourMs }]);
    expect(await runs()).toMatchObject([{ dueMs: null }]);
  });

  it('includes calibration while none was announced', async () => {
    await send({ cause: 'calibration', ml: 10 });
    expect(await givenMl()).toBe(10);
  });
});

describe('a run is never refused for its clock', () => {
  const stateAt = (atMs: number) => scene.send('state', { online: true, atMs, heads: [] });

  it('and takes the time of its arrival, flagged, when the clock is unset', async () => {
    await send({ atMs: 12_345, cause: 'schedule', dueMs: 12_000 });
    expect(await runs()).toMatchObject([{ begunMs: nowMs, endedMs: nowMs, flags: '["clock-unset","due-off"]' }]);
    expect(await ledger()).toMatchObject([{ atMs: nowMs, deltaMl: 0.5 }]);
  });

  it('nor for seconds sent by mistake, with or without a fraction', async () => {
    await send({ atMs: nowMs / 1000 + 0.25 });
    expect(await runs()).toMatchObject([{ endedMs: nowMs, flags: '["clock-unset"]' }]);
  });

  it('nor for a time that is missing or null', async () => {
    await send({ atMs: null });
    await scene.send('run', { run: 'r2', head: 1, phase: 'ended', ml: 0.5, cause: 'button' });
    expect((await runs()).map((run) => run.flags)).toEqual(['["clock-unset"]', '["clock-unset"]']);
  });

  it.each([
    ['before 2020', Date.UTC(2019, 11, 31)],
    ['over 10 minutes ahead', nowMs + 601_000],
    ['beyond any date', 1e300],
  ])('nor for a date %s', async (_name, atMs) => {
    await send({ atMs });
    expect(await runs()).toMatchObject([{ begunMs: nowMs, endedMs: nowMs, flags: '["clock-off"]' }]);
    expect(await givenMl()).toBe(0.5);
  });

  it('nor when the pump has just said that its clock is a day off', async () => {
    await stateAt(nowMs - 86_400_000);
    await send({ atMs: nowMs - 86_400_000 });
    expect(await runs()).toMatchObject([{ endedMs: nowMs, flags: '["clock-off"]' }]);
  });

  it('and keeps its own time, however late, when the clock is right: a buffer uploaded late is no burst', async () => {
    await stateAt(nowMs + 100_000);
    for (const hours of [30, 20, 10]) await send({ run: `late ${hours}`, atMs: nowMs - hours * hourMs });
    expect((await ledger()).map((row) => row.atMs)).toEqual([30, 20, 10].map((hours) => nowMs - hours * hourMs));
    expect((await runs()).every((run) => run.flags === '[]')).toBe(true);
  });

  it('and is believed again once the pump says the right time', async () => {
    await stateAt(nowMs - 86_400_000);
    await stateAt(nowMs);
    await send({ atMs: nowMs - 5_000 });
    expect(await runs()).toMatchObject([{ endedMs: nowMs - 5_000, flags: '[]' }]);
  });

  it('and counts once when its steps with an unset clock repeat', async () => {
    await send({ atMs: 5 });
    scene.clock.advance(60_000);
    await send({ atMs: 5 });
    expect(await runs()).toMatchObject([{ endedMs: nowMs }]);
    expect(await givenMl()).toBe(0.5);
  });
});

describe('what a head was used for', () => {
  it('is carbon of unknown strength for the device’s system when nobody registered it', async () => {
    await send({});
    expect(await ledger()).toMatchObject([
      { systemId: scene.systemId, headId: null, kind: 'carbon', productRevisionId: null, oxygenDemandMg: null },
    ]);
  });

  it('is the use in force when the run began, with the revision of its product and its oxygen demand', async () => {
    const { productId, ids } = await addProduct([
      { fromMs: 0, oxygenDemandMgPerMl: 600 },
      { fromMs: nowMs - hourMs, oxygenDemandMgPerMl: 650 },
    ]);
    const headId = await assign({ fromMs: nowMs - 10 * hourMs, productId });
    await send({ run: 'early', atMs: nowMs - 5 * hourMs });
    await send({ run: 'late', atMs: nowMs });
    expect(await ledger()).toMatchObject([
      { headId, productRevisionId: ids[0], oxygenDemandMg: 300 },
      { headId, productRevisionId: ids[1], oxygenDemandMg: 325 },
    ]);
  });

  it('may have been another system', async () => {
    const otherSystemId = await addSystemRow(scene.core, scene.siteId, 'Frag shelf');
    const headId = await assign({ fromMs: 0, toMs: nowMs - hourMs, kind: 'other', systemId: otherSystemId });
    await assign({ headId, fromMs: nowMs - hourMs });
    await send({ run: 'a', atMs: nowMs - 2 * hourMs });
    await send({ run: 'b' });
    expect((await ledger()).map((row) => [row.systemId, row.kind])).toEqual([
      [otherSystemId, 'other'],
      [scene.systemId, 'carbon'],
    ]);
  });

  it('is put right by reversal when the beginning of a run is reported late', async () => {
    const otherSystemId = await addSystemRow(scene.core, scene.siteId, 'Frag shelf');
    const headId = await assign({ fromMs: 0, toMs: nowMs - 3_000, systemId: otherSystemId });
    await assign({ headId, fromMs: nowMs - 3_000 });
    await send({ phase: 'running', ml: 0.2, atMs: nowMs - 2_000 });
    await send({ phase: 'running', ml: 0.3, atMs: nowMs - 1_000 });
    await send({ phase: 'begun', ml: 0, atMs: nowMs - 5_000 });
    await send({ ml: 0.5, atMs: nowMs });
    await send({ ml: 0.5, atMs: nowMs });
    const net = new Map<string, number>();
    for (const row of await ledger()) net.set(row.systemId, (net.get(row.systemId) ?? 0) + row.deltaMl);
    expect(net.get(scene.systemId)).toBeCloseTo(0, 12);
    expect(net.get(otherSystemId)).toBeCloseTo(0.5, 12);
    expect(await runs()).toMatchObject([{ systemId: otherSystemId, ml: 0.5 }]);
  });
});

describe('a run that does not fit', () => {
  it.each([
    ['a negative volume', { ml: -0.5 }],
    ['a volume that is no number', { ml: '0.5' }],
    ['a head that no pump has', { head: 17 }],
    ['a cause that nobody knows', { cause: 'whim' }],
    ['no id', { run: '' }],
  ])('for %s is refused, listed, and counts nowhere', async (_name, bad) => {
    await send(bad);
    expect(scene.outcome()).toBe('refused:wrong-shape');
    expect(await runs()).toEqual([]);
    expect(await ledger()).toEqual([]);
    expect(await scene.core.reader.selectFrom('reject').select('reason').execute()).toEqual([{ reason: 'wrong-shape' }]);
  });

  it('for a volume that overflows is told apart', async () => {
    await scene.send('run', JSON.stringify(step({ ml: 0 })).replace('"ml":0', '"ml":1e999'));
    expect(scene.outcome()).toBe('refused:not-finite');
  });
});

it('keeps the order that a run carries out', async () => {
  await send({ cause: 'order', order: 'o1' });
  expect(await runs()).toMatchObject([{ orderId: 'o1' }]);
});
