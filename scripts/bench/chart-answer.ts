import { brotliCompressSync } from 'node:zlib';
import type { Points } from '#shared/contract/telemetry.ts';
import { type Ratio, ratioOf } from './ratio.ts';

/** The answer for a chart as it is sent, in columns, against one object a point. Bytes, so that every run tells the same. */
export function benchChartAnswer(points: Points): Ratio[] {
  const { t, min, mean, max, count } = points;
  const columns = Buffer.from(JSON.stringify(points));
  const objects = Buffer.from(
    JSON.stringify({
      resolutionMs: points.resolutionMs,
      points: t.map((at, index) => ({ t: at, min: min[index], mean: mean[index], max: max[index], count: count[index] })),
    }),
  );
  const what = `bytes of a chart of ${t.length} points: one object a point against columns`;
  return [
    ratioOf('chart-answer', what, [objects.length / columns.length]),
    ratioOf('chart-answer-brotli', `${what}, both brotli`, [brotliCompressSync(objects).length / brotliCompressSync(columns).length]),
  ];
}
