import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { StatePayload } from '#shared/mqtt/payloads.ts';
import { type IngestScene, openIngestScene } from '../../helpers/ingest-scene.ts';

let scene: IngestScene;
const nowMs = Date.parse('2026-03-01T12:00:00Z');
const told: StatePayload[] = [];

beforeEach(async () => {
  told.length = 0;
  scene = await openIngestScene({ onState: (_tx, _device, state) => void told.push(state) });
});

afterEach(() => scene.close());

const state = () => scene.core.reader.selectFrom('deviceState').selectAll().executeTakeFirst();
const frames = async () =>
  (await scene.core.reader.selectFrom('change').select('payload').where('type', '=', 'state').orderBy('seq').execute()).map((row) =>
    JSON.parse(row.payload),
  );
const head = { head: 1, state: 'idle', odometerMl: 5120.4, odometerEpoch: 0 };

describe('what a device says of itself', () => {
  it('is kept, told to browsers, and marks its system for the alarms', async () => {
    await scene.send('state', { online: true, atMs: nowMs - 1_500, scheduleVersion: 3, heads: [head] });
    expect(await state()).toMatchObject({
      online: 1,
      heardAtMs: nowMs,
      changedAtMs: nowMs,
      scheduleVersion: 3,
      clockOffsetMs: -1_500,
      clockUnset: 0,
    });
    expect(await frames()).toEqual([
      {
        deviceId: scene.deviceId,
        online: true,
        heardAt: '2026-03-01T12:00:00.000Z',
        changedAt: '2026-03-01T12:00:00.000Z',
        scheduleVersion: 3,
        clockOffsetSeconds: -1.5,
        clockUnset: false,
        heads: [head],
      },
    ]);
    expect(await scene.core.reader.selectFrom('dirtySystem').select('systemId').execute()).toEqual([{ systemId: scene.systemId }]);
    expect(told).toEqual([{ online: true, atMs: nowMs - 1_500, scheduleVersion: 3, heads: [head] }]);
  });

  it('says that its clock is not set, in milliseconds since it started or in seconds', async () => {
    await scene.send('state', { online: true, atMs: 60_000 });
    expect(await state()).toMatchObject({ clockUnset: 1, clockOffsetMs: null, heardAtMs: nowMs });
    await scene.send('state', { online: true, atMs: nowMs });
    expect(await state()).toMatchObject({ clockUnset: 0, clockOffsetMs: 0 });
    await scene.send('state', { online: true, atMs: nowMs / 1000 });
    expect(await state()).toMatchObject({ clockUnset: 1 });
  });

  it('is refused when it has not the right shape, and is a sign of life all the same', async () => {
    await scene.send('state', { online: 'yes' });
    expect(scene.outcome()).toBe('refused:wrong-shape');
    expect(await state()).toMatchObject({ online: 1, heads: '[]' });
    expect(told).toEqual([]);
  });
});

describe('whether a device is online', () => {
  it('follows any message', async () => {
    await scene.send('senml', []);
    expect(await state()).toMatchObject({ online: 1, heardAtMs: nowMs, changedAtMs: nowMs });
    scene.clock.advance(30_000);
    await scene.send('senml', []);
    expect(await state()).toMatchObject({ online: 1, heardAtMs: nowMs + 30_000, changedAtMs: nowMs });
    expect(await frames()).toHaveLength(1);
  });

  it('ends with its last will, whatever that says, and what it last reported stays', async () => {
    await scene.send('state', { online: true, atMs: nowMs, scheduleVersion: 3, heads: [head] });
    scene.clock.advance(5_000);
    await scene.send('state', 'gone', { isWill: true });
    expect(await state()).toMatchObject({ online: 0, heardAtMs: nowMs, changedAtMs: nowMs + 5_000, scheduleVersion: 3 });
    expect((await frames()).at(-1)).toMatchObject({ online: false, heads: [head] });
    expect(told.at(-1)).toEqual({ online: false });
  });

  it('ends when the device says so itself', async () => {
    await scene.send('state', { online: true });
    await scene.send('state', { online: false });
    expect(await state()).toMatchObject({ online: 0 });
  });

  it('ends after 90 s of silence, and begins again with the next message', async () => {
    await scene.send('state', { online: true });
    scene.clock.advance(89_999);
    await scene.ingest.sweepSilent(scene.clock.nowMs());
    expect(await state()).toMatchObject({ online: 1 });
    scene.clock.advance(1);
    await scene.ingest.sweepSilent(scene.clock.nowMs());
    expect(await state()).toMatchObject({ online: 0, changedAtMs: nowMs + 90_000, heardAtMs: nowMs });
    await scene.ingest.sweepSilent(scene.clock.nowMs() + 1_000);
    expect((await frames()).map((frame) => frame.online)).toEqual([true, false]);
    await scene.send('senml', []);
    expect(await state()).toMatchObject({ online: 1 });
  });

  it('does not follow an old state that a broker had kept', async () => {
    await scene.send('state', { online: true, atMs: nowMs - 86_400_000, scheduleVersion: 3, heads: [head] }, { retained: true });
    expect(await state()).toMatchObject({ online: 0, scheduleVersion: 3, clockOffsetMs: null });
    await scene.send('state', { online: true, atMs: nowMs });
    scene.clock.advance(60_000);
    await scene.send('state', { online: true, atMs: nowMs }, { retained: true });
    expect(await state()).toMatchObject({ online: 1, heardAtMs: nowMs, clockOffsetMs: 0 });
    await scene.send('state', { online: false }, { retained: true });
    expect(await state()).toMatchObject({ online: 0 });
  });
});

it('proves a stop by no state that a broker had kept, which may be older than the stop', async () => {
  const told: boolean[] = [];
  await scene.close();
  scene = await openIngestScene({ onState: () => void told.push(true) });
  const state = { online: true, atMs: nowMs, heads: [{ ...head, state: 'stopped' }] };
  await scene.send('state', state, { retained: true });
  expect(told).toEqual([]);
  await scene.send('state', state);
  expect(told).toEqual([true]);
});

it('hands a receipt to the orders within the same unit', async () => {
  const receipts: unknown[] = [];
  await scene.close();
  scene = await openIngestScene({ onReceipt: (_tx, device, receipt, receivedMs) => void receipts.push([device.id, receipt, receivedMs]) });
  await scene.send('receipt', { order: 'o1', atMs: nowMs, outcome: 'refused', why: 'clock' });
  expect(receipts).toEqual([[scene.deviceId, { order: 'o1', atMs: nowMs, outcome: 'refused', why: 'clock' }, nowMs]]);
});

it('stores nothing of a message whose hook fails, and does not acknowledge it', async () => {
  await scene.close();
  scene = await openIngestScene({
    onRun: () => {
      throw new Error('the hook failed');
    },
  });
  await expect(scene.send('run', { run: 'r', head: 1, phase: 'ended', atMs: nowMs, ml: 1, cause: 'button' })).rejects.toThrow(
    'the hook failed',
  );
  expect(await scene.core.reader.selectFrom('run').selectAll().execute()).toEqual([]);
  expect(await scene.core.reader.selectFrom('doseLedger').selectAll().execute()).toEqual([]);
});
