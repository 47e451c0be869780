import type { Points, Series } from '#shared/contract/telemetry.ts';
import { practicalSalinity } from '#shared/domain/practical-salinity.ts';
import { salinityPair } from '../../lib/salinity.ts';
import type { Columns } from '../charts/gaps.ts';
import type { LaneInput } from '../charts/lane-model.ts';

const nothing: Columns = { resolutionMs: 0, t: [], min: [], mean: [], max: [], count: [] };

/**
 * Practical salinity (PSS-78) where both series have a sample or bucket of the same time, from the means of the two; nothing where
 * they do not match or the scale is not defined. How far it went within a bucket cannot be told from two ranges.
 */
export function salinityColumns(conductivity: Columns, temperature: Columns): Columns {
  if (conductivity.resolutionMs !== temperature.resolutionMs) return nothing;
  const indexByT = new Map(temperature.t.map((tMs, i) => [tMs, i]));
  const found = conductivity.t.flatMap((tMs, i) => {
    const other = indexByT.get(tMs);
    if (other === undefined) return [];
    const salinity = practicalSalinity(conductivity.mean[i] ?? NaN, temperature.mean[other] ?? NaN);
    return salinity === null ? [] : [{ tMs, salinity, count: Math.min(conductivity.count[i] ?? 0, temperature.count[other] ?? 0) }];
  });
  const values = found.map(({ salinity }) => salinity);
  return {
    resolutionMs: conductivity.resolutionMs,
    t: found.map(({ tMs }) => tMs),
    min: values,
    mean: values,
    max: values,
    count: found.map(({ count }) => count),
  };
}

/** The lane of a system that measures both; null for one that does not. */
export function salinityLane(all: readonly Series[], bySeriesId: ReadonlyMap<string, Points>): LaneInput | null {
  const pair = salinityPair(all);
  if (pair === null) return null;
  const columns = salinityColumns(bySeriesId.get(pair.conductivity.id) ?? nothing, bySeriesId.get(pair.temperature.id) ?? nothing);
  return {
    id: 'salinity',
    title: 'Salinity, computed',
    unit: '',
    decimals: 1,
    fromZero: false,
    leastSpan: 1,
    band: null,
    limits: [],
    traces: [{ id: 'salinity', label: 'Salinity', dashed: false, columns }],
    tests: null,
    doses: null,
  };
}
