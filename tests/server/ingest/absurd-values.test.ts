import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type IngestScene, openIngestScene } from '../../helpers/ingest-scene.ts';

let scene: IngestScene;
const nowMs = Date.parse('2026-03-01T12:00:00Z');

beforeEach(async () => {
  scene = await openIngestScene();
});

afterEach(() => scene.close());

const DEEP = 32_000;
const nested = '['.repeat(DEEP) + ']'.repeat(DEEP);

describe('a message that no device should send', () => {
  it.each([
    ['a value nested as deeply as a message can be', `[{"n":"ph","u":"pH","v":${nested}}]`],
    ['an object in place of a number that cannot be made one', '[{"n":"ph","u":"pH","v":{"valueOf":1,"toString":1}}]'],
  ])('is refused and acknowledged: %s', async (_what, payload) => {
    await scene.send('senml', payload);
    expect(scene.outcome()).toBe('refused:wrong-shape');
  });

  it('is still told apart as not finite', async () => {
    await scene.send('senml', '[{"n":"ph","u":"pH","v":1e999}]');
    expect(scene.outcome()).toBe('refused:not-finite');
  });

  it('loses no dose over a motor time that nothing can hold', async () => {
    await scene.send('run', { run: 'r1', head: 1, phase: 'ended', atMs: nowMs, ml: 0.5, cause: 'button', onMs: 1e300 });
    expect(scene.outcome()).toBe('stored');
    expect(await scene.core.reader.selectFrom('doseLedger').select('deltaMl').execute()).toEqual([{ deltaMl: 0.5 }]);
  });
});
