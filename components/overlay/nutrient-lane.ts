import type { Test } from '#shared/contract/records.ts';
import { defaultBands, formatBand, nutrientNames, type Nutrient } from '../../lib/format/nutrient.ts';
import type { LaneInput } from '../charts/lane-model.ts';
import type { TestPoint } from '../charts/test-marks.ts';

function pointsOf(nutrient: Nutrient, tests: readonly Test[]): TestPoint[] {
  return tests
    .filter((test) => test.quantity === nutrient)
    .map((test) => ({ id: test.id, tMs: Date.parse(test.at), value: test.canonicalMgPerL, below: test.below, edited: test.edited }))
    .sort((a, b) => a.tMs - b.tMs);
}

/** Whole numbers where every result is one: a figure shows no more than the kit can know. */
function decimalsOf(nutrient: Nutrient, points: readonly TestPoint[]): number {
  if (nutrient === 'phosphate') return 2;
  return points.every((point) => Math.abs(point.value - Math.round(point.value)) < 0.05) ? 0 : 1;
}

/** The lane of a nutrient: its tests as the ion, over the band that is aimed for. Tests that are not here yet are not said to be none. */
export function nutrientLane(nutrient: Nutrient, tests: readonly Test[] | undefined): LaneInput {
  const points = pointsOf(nutrient, tests ?? []);
  const band = defaultBands[nutrient];
  const isNitrate = nutrient === 'nitrate';
  return {
    id: nutrient,
    title: nutrientNames[nutrient],
    unit: 'mg/L',
    decimals: decimalsOf(nutrient, points),
    fromZero: true,
    leastSpan: band.highMgPerL * 1.2,
    band: { low: band.lowMgPerL, high: band.highMgPerL, label: `aim ${formatBand(nutrient)}` },
    limits: [],
    traces: [],
    tests: tests === undefined ? null : { shape: isNitrate ? 'circle' : 'square', dashed: !isNitrate, points },
    doses: null,
  };
}
