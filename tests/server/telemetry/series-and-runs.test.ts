import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { createTelemetry, positionOfRun, type Telemetry } from '../../../server/telemetry/create-telemetry.ts';
import { addDeviceRow, type IngestScene, openIngestScene } from '../../helpers/ingest-scene.ts';

let scene: IngestScene;
let telemetry: Telemetry;
const nowMs = Date.parse('2026-03-01T12:00:00Z');

beforeEach(async () => {
  scene = await openIngestScene();
  telemetry = createTelemetry(scene.core);
});

afterEach(async () => {
  await telemetry.close();
  await scene.close();
});

describe('a series', () => {
  it('can be named, and told what it measures, by a person who is written down', async () => {
    await scene.send('senml', [{ n: 'a1', u: 'V', v: 1.5 }]);
    const [before] = await telemetry.listSeries(scene.systemId);
    expect(before).toMatchObject({ channel: 'a1', name: null, quantity: null, unit: 'V', lastT: nowMs, lastValue: 1.5, conflicts: 0 });
    const input = { siteId: scene.siteId, seriesId: before?.id ?? '', userId: 'keeper' };
    await telemetry.updateSeries({ ...input, patch: { name: 'Return pump' } });
    const after = await telemetry.updateSeries({ ...input, patch: { quantity: 'flow' } });
    expect(after).toMatchObject({ name: 'Return pump', quantity: 'flow' });
    expect(await telemetry.listSeries(scene.systemId)).toEqual([after]);
    const audit = await scene.core.reader.selectFrom('audit').select(['actorId', 'after']).where('entity', '=', 'series').execute();
    expect(audit.map((row) => [row.actorId, JSON.parse(row.after ?? '')])).toEqual([
      ['keeper', { name: 'Return pump', quantity: null }],
      ['keeper', { name: 'Return pump', quantity: 'flow' }],
    ]);
  });

  it('of another site cannot be changed', async () => {
    await scene.send('senml', [{ n: 'a1', v: 1 }]);
    const [series] = await telemetry.listSeries(scene.systemId);
    const foreign = { siteId: 'another', seriesId: series?.id ?? '', userId: 'keeper', patch: { name: 'Mine' } };
    await expect(telemetry.updateSeries(foreign)).rejects.toThrow('no such series');
  });
});

describe('the list of runs', () => {
  it('goes through pages without losing one, though two pumps gave the same id and moment', async () => {
    const other = await addDeviceRow(scene.core, scene.siteId, scene.systemId);
    for (const [index, run] of ['a', 'b', 'c'].entries()) {
      const payload = { run, head: 1, phase: 'ended', atMs: nowMs - index * 1_000, ml: 1, cause: 'button' };
      await scene.send('run', payload);
      await scene.send('run', payload, { deviceId: other });
    }
    const seen: string[] = [];
    let after: { key: number; id: string } | null = null;
    for (;;) {
      const [row] = await telemetry.listRuns({ systemId: scene.systemId, page: { limit: 1, after } });
      if (row === undefined) break;
      seen.push(`${row.run} ${row.deviceId}`);
      after = positionOfRun(row);
    }
    expect(seen.map((name) => name[0]).join('')).toBe('aabbcc');
    expect(new Set(seen).size).toBe(6);
    const range = { systemId: scene.systemId, fromMs: nowMs - 1_000, toMs: nowMs, page: { limit: 10, after: null } };
    expect((await telemetry.listRuns(range)).map((row) => row.run)).toEqual(['b', 'b']);
  });
});

it('lists refused messages, the newest first', async () => {
  for (const text of ['1', '2', '3']) await scene.send('senml', `no ${text}`);
  const [first, second] = await telemetry.listRejects(scene.deviceId, { limit: 2, after: null });
  expect([first?.payload, second?.payload]).toEqual(['no 3', 'no 2']);
  const rest = await telemetry.listRejects(scene.deviceId, { limit: 2, after: { key: second?.seq ?? 0, id: '' } });
  expect(rest.map((row) => row.payload)).toEqual(['no 1']);
});
