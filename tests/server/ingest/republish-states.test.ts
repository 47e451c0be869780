import { expect, it } from 'vitest';
import { republishStates } from '../../../server/ingest/republish-states.ts';
import { openIngestScene } from '../../helpers/ingest-scene.ts';

it('puts back as retained what each device last said of itself', async () => {
  const scene = await openIngestScene();
  try {
    const heads = [{ head: 1, state: 'stopped', odometerMl: 5, odometerEpoch: 0 }];
    await scene.send('state', { online: true, atMs: scene.clock.nowMs(), scheduleVersion: 3, heads });
    const published: unknown[] = [];
    await republishStates(scene.core.reader, {
      publish: async (topic, payload, options) => void published.push([topic, JSON.parse(payload.toString()), options]),
    });
    expect(published).toEqual([
      [scene.topic('state'), { online: true, atMs: scene.clock.nowMs(), scheduleVersion: 3, heads }, { retain: true, qos: 1 }],
    ]);
  } finally {
    await scene.close();
  }
});
