import { writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import path from 'node:path';
import { type BenchPlace, openBenchPlace, RESULTS_FOLDER } from './bench-place.ts';
import { benchChartAnswer } from './chart-answer.ts';
import { benchGroupCommit } from './group-commit.ts';
import { benchNinetyDays } from './ninety-days.ts';
import type { Ratio } from './ratio.ts';
import { benchStopOrder } from './stop-order.ts';

/** `npm run bench`: ratios only. A time tells of the machine and of what else ran on it; a ratio tells of the code. */
const rounded = (value: number) => Number(value.toPrecision(3));

const ratios: Ratio[] = [];
function tell(...found: Ratio[]): void {
  for (const ratio of found) {
    const spread = ratio.rounds === 1 ? '' : ` (${rounded(ratio.lowest)} to ${rounded(ratio.highest)} in ${ratio.rounds} rounds)`;
    console.log(`${ratio.name.padEnd(20)} ${String(rounded(ratio.median)).padStart(6)} x${spread}\n  ${ratio.means}`);
    ratios.push(ratio);
  }
}

/** Each benchmark gets a database of its own, so that none pays for the rows of another. */
async function inPlace<Result>(work: (place: BenchPlace) => Promise<Result>): Promise<Result> {
  const place = await openBenchPlace();
  try {
    return await work(place);
  } finally {
    await place.close();
  }
}

tell(await inPlace(benchGroupCommit));
tell(await inPlace(benchStopOrder));
const { ratio, points } = await inPlace(benchNinetyDays);
tell(ratio, ...benchChartAnswer(points));

const at = new Date().toISOString();
const file = path.join(RESULTS_FOLDER, `${at.replaceAll(':', '-')}.json`);
writeFileSync(file, `${JSON.stringify({ at, node: process.version, processors: cpus().length, ratios }, null, 2)}\n`);
console.log(`Written to ${file}`);
