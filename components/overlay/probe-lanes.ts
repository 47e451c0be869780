import type { Points, Quantity, Series } from '#shared/contract/telemetry.ts';
import { salinityPair } from '../../lib/salinity.ts';
import { seriesName, seriesNameAmong, seriesUnit } from '../../lib/format/series-value.ts';
import { decimalsFor } from '../../lib/format/number.ts';
import type { Columns } from '../charts/gaps.ts';
import type { LaneInput } from '../charts/lane-model.ts';
import { salinityLane } from './salinity-lane.ts';

/** How a kind of quantity is laid out; in this order, with what is not in use by default folded away. */
interface Layout {
  readonly title: string;
  readonly decimals: number;
  /** Less than this is a probe's noise and does not fill the lane. */
  readonly leastSpan: number;
  readonly fromZero: boolean;
  readonly folded: boolean;
}

const layouts: Record<Quantity, Layout> = {
  temperature: { title: 'Temperature', decimals: 1, leastSpan: 1, fromZero: false, folded: false },
  ph: { title: 'pH', decimals: 2, leastSpan: 0.2, fromZero: false, folded: false },
  orp: { title: 'ORP', decimals: 0, leastSpan: 40, fromZero: false, folded: false },
  oxygen: { title: 'Oxygen', decimals: 1, leastSpan: 1, fromZero: false, folded: false },
  'oxygen-percent': { title: 'Oxygen saturation', decimals: 0, leastSpan: 10, fromZero: false, folded: false },
  conductivity: { title: 'Conductivity', decimals: 1, leastSpan: 1, fromZero: false, folded: true },
  level: { title: 'Level', decimals: 0, leastSpan: 100, fromZero: true, folded: true },
  power: { title: 'Power', decimals: 0, leastSpan: 20, fromZero: true, folded: true },
  flow: { title: 'Flow', decimals: 1, leastSpan: 1, fromZero: true, folded: true },
};
const order = Object.keys(layouts);
const seriesPerLane = 3;
const salinityId = 'salinity';

/** The series of one lane: one kind of quantity in one unit. */
export interface ProbeGroup {
  readonly id: string;
  readonly title: string;
  readonly unit: string;
  readonly folded: boolean;
  readonly series: readonly Series[];
}

function kindOf(series: Series): string {
  return series.quantity === null ? series.id : `${series.quantity} ${series.unit}`;
}

/** Series by kind of quantity, at most three a lane; a series whose quantity nobody knows has a lane of its own. */
export function groupProbes(all: readonly Series[]): ProbeGroup[] {
  const kinds = new Map<string, Series[]>();
  for (const series of all) kinds.set(kindOf(series), [...(kinds.get(kindOf(series)) ?? []), series]);
  const pair = salinityPair(all);
  const computed: ProbeGroup[] =
    pair === null
      ? []
      : [{ id: salinityId, title: 'Salinity, computed', unit: '', folded: true, series: [pair.conductivity, pair.temperature] }];
  const rank = (series: Series | undefined) => (series?.quantity ? order.indexOf(series.quantity) : order.length);
  const measured = [...kinds.entries()]
    .sort(([, a], [, b]) => rank(a[0]) - rank(b[0]))
    .flatMap(([kind, series]) => {
      const count = Math.ceil(series.length / seriesPerLane);
      return Array.from({ length: count }, (_, i): ProbeGroup => {
        const own = series.slice(i * seriesPerLane, (i + 1) * seriesPerLane);
        const first = own[0];
        const layout = first?.quantity ? layouts[first.quantity] : null;
        const title = layout?.title ?? (first ? seriesName(first) : kind);
        return {
          id: `${kind} ${i}`,
          title: count > 1 ? `${title} (${i + 1} of ${count})` : title,
          unit: first ? seriesUnit(first) : '',
          folded: layout?.folded ?? true,
          series: own,
        };
      });
    });
  return [...measured, ...computed];
}

const nothing: Columns = { resolutionMs: 0, t: [], min: [], mean: [], max: [], count: [] };

function decimalsOf(points: readonly Columns[]): number {
  return decimalsFor(points[0]?.mean.at(-1) ?? 0);
}

export function probeLane(group: ProbeGroup, bySeriesId: ReadonlyMap<string, Points>): LaneInput {
  const salinity = group.id === salinityId ? salinityLane(group.series, bySeriesId) : null;
  if (salinity !== null) return salinity;
  const quantity = group.series[0]?.quantity ?? null;
  const layout = quantity === null ? null : layouts[quantity];
  const columns = group.series.map((series) => bySeriesId.get(series.id) ?? nothing);
  return {
    id: group.id,
    title: group.title,
    unit: group.unit,
    decimals: layout?.decimals ?? decimalsOf(columns),
    fromZero: layout?.fromZero ?? false,
    leastSpan: layout?.leastSpan ?? 0,
    band: null,
    limits: [],
    traces: group.series.map((series, i) => ({
      id: series.id,
      label: seriesNameAmong(series, group.series),
      dashed: i > 0,
      columns: columns[i] ?? nothing,
    })),
    tests: null,
    doses: null,
  };
}
