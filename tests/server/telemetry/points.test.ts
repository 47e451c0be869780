import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Points } from '#shared/contract/telemetry.ts';
import { createTelemetry, type Telemetry } from '../../../server/telemetry/create-telemetry.ts';
import { bucketWidthMs } from '../../../server/telemetry/read-points.ts';
import { type IngestScene, openIngestScene } from '../../helpers/ingest-scene.ts';

let scene: IngestScene;
let telemetry: Telemetry;
const nowMs = Date.parse('2026-03-01T12:00:00Z');
const minuteMs = 60_000;
const hourMs = 3_600_000;
const dayMs = 86_400_000;

beforeEach(async () => {
  scene = await openIngestScene();
  telemetry = createTelemetry(scene.core);
});

afterEach(async () => {
  await telemetry.close();
  await scene.close();
});

/** A sample every `everyMs` in [`fromMs`, `toMs`), whose value is its number. */
async function fill(fromMs: number, toMs: number, everyMs: number): Promise<{ tMs: number; value: number }[]> {
  const samples = Array.from({ length: Math.ceil((toMs - fromMs) / everyMs) }, (_, index) => ({
    tMs: fromMs + index * everyMs,
    value: index,
  }));
  for (let at = 0; at < samples.length; at += 500) {
    const part = samples.slice(at, at + 500);
    await scene.send(
      'senml',
      part.map(({ tMs, value }) => ({ n: 'water', u: 'Cel', v: value, t: tMs / 1000 })),
    );
  }
  return samples;
}

async function points(fromMs: number, toMs: number, most: number): Promise<Points> {
  const [series] = await telemetry.listSeries(scene.systemId);
  return telemetry.points({ seriesId: series?.id ?? '', fromMs, toMs, points: most });
}

/** The same by hand, from the samples. */
function bucketsOf(samples: { tMs: number; value: number }[], fromMs: number, toMs: number, widthMs: number) {
  const buckets = new Map<number, number[]>();
  for (const { tMs, value } of samples.filter((sample) => sample.tMs >= fromMs && sample.tMs < toMs)) {
    const t = Math.floor(tMs / widthMs) * widthMs;
    buckets.set(t, [...(buckets.get(t) ?? []), value]);
  }
  const columns = [...buckets].sort(([one], [other]) => one - other);
  return {
    resolutionMs: widthMs,
    t: columns.map(([t]) => t),
    min: columns.map(([, values]) => Math.min(...values)),
    mean: columns.map(([, values]) => values.reduce((sum, value) => sum + value, 0) / values.length),
    max: columns.map(([, values]) => Math.max(...values)),
    count: columns.map(([, values]) => values.length),
  };
}

describe('the points of a series', () => {
  it('are the samples while they are no more than asked for, from the start and without the end', async () => {
    const samples = await fill(nowMs - 10_000, nowMs, 1_000);
    expect(await points(nowMs - 10_000, nowMs - 5_000, 5)).toEqual({
      resolutionMs: 0,
      t: samples.slice(0, 5).map((sample) => sample.tMs),
      min: [0, 1, 2, 3, 4],
      mean: [0, 1, 2, 3, 4],
      max: [0, 1, 2, 3, 4],
      count: [1, 1, 1, 1, 1],
    });
  });

  it.each([
    ['minutes', 2 * hourMs, 120],
    ['multiples of a minute', 2 * hourMs, 50],
    ['quarters of an hour', 2 * hourMs, 8],
    ['hours', 2 * hourMs, 2],
    ['one bucket', 2 * hourMs, 1],
    ['multiples that do not begin with the range', 100 * minuteMs + 12_345, 13],
  ])('are buckets of %s when there are more, and tell of exactly the samples in the range', async (_name, rangeMs, most) => {
    const samples = await fill(nowMs - 3 * hourMs, nowMs, 20_000);
    const [fromMs, toMs] = [nowMs - 10_000 - rangeMs, nowMs - 10_000];
    const answer = await points(fromMs, toMs, most);
    expect(answer).toEqual(bucketsOf(samples, fromMs, toMs, answer.resolutionMs));
    expect(answer.t.length).toBeLessThanOrEqual(most);
    expect(answer.resolutionMs % minuteMs).toBe(0);
    expect(answer.count.reduce((sum, count) => sum + count, 0)).toBe(Math.floor(rangeMs / 20_000) + (rangeMs % 20_000 > 0 ? 1 : 0));
  });

  it('leave empty buckets out', async () => {
    await fill(nowMs - 3 * hourMs, nowMs - 2.5 * hourMs, 10_000);
    await fill(nowMs - 0.5 * hourMs, nowMs, 10_000);
    expect((await points(nowMs - 3 * hourMs, nowMs, 12)).t).toEqual(
      [0, 0.25, 2.5, 2.75].map((hours) => nowMs - 3 * hourMs + hours * hourMs),
    );
  });

  it('come from the quarters of an hour where minutes are no longer kept', async () => {
    const samples = await fill(nowMs - 40 * dayMs, nowMs - 40 * dayMs + 6 * hourMs, minuteMs);
    const [fromMs, toMs] = [nowMs - 40 * dayMs, nowMs - 40 * dayMs + 6 * hourMs];
    const answer = await points(fromMs, toMs, 200);
    expect(answer.resolutionMs).toBe(15 * minuteMs);
    expect(answer).toEqual(bucketsOf(samples, fromMs, toMs, 15 * minuteMs));
  });

  it('of two series do not mix', async () => {
    await scene.send('senml', [{ n: 'orp', u: 'mV', v: 400, t: nowMs / 1000 - 5 }]);
    await fill(nowMs - 10_000, nowMs, 1_000);
    const [, orp] = await telemetry.listSeries(scene.systemId);
    expect((await telemetry.points({ seriesId: orp?.id ?? '', fromMs: nowMs - 20_000, toMs: nowMs, points: 10 })).mean).toEqual([400]);
  });

  it('are refused for a series that does not exist', async () => {
    await expect(telemetry.points({ seriesId: 'none', fromMs: 0, toMs: 1, points: 1 })).rejects.toThrow('no such series');
  });
});

describe('the width of a bucket', () => {
  it('is the smallest that fits, whatever the range', () => {
    for (const rangeMs of [hourMs + 1, 7 * hourMs, 3 * dayMs, 29 * dayMs]) {
      for (const most of [1, 2, 7, 100, 999]) {
        const request = { fromMs: nowMs - rangeMs, toMs: nowMs, points: most, nowMs };
        const widthMs = bucketWidthMs(request);
        const count = (width: number) => Math.floor((request.toMs - 1) / width) - Math.floor(request.fromMs / width) + 1;
        expect(count(widthMs)).toBeLessThanOrEqual(most);
        if (widthMs > minuteMs && widthMs * most > rangeMs + 2 * minuteMs * most) expect(count(widthMs - minuteMs)).toBeGreaterThan(most);
      }
    }
  });
});
