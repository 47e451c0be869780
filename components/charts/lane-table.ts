import { DateTime } from 'luxon';
import { formatNumber } from '../../lib/format/number.ts';
import { spanWords, splitAtGaps } from './gaps.ts';
import type { LaneInput } from './lane-model.ts';
import type { TimeRange } from './time-axis.ts';
import type { TraceInput } from './trace-model.ts';

/** What a lane shows, as a table: the same numbers, the newest first. */
export interface LaneTable {
  readonly id: string;
  readonly caption: string;
  readonly columns: readonly { readonly key: string; readonly title: string; readonly numeric: boolean }[];
  readonly rows: readonly { readonly key: string; readonly cells: readonly string[] }[];
}

const whenColumn = { key: 'when', title: 'When', numeric: false };
const numeric = (key: string, title: string) => ({ key, title, numeric: true });

function whenIn(zone: string): (tMs: number) => string {
  return (tMs) => DateTime.fromMillis(tMs, { zone }).toFormat('d LLL yyyy, HH:mm');
}

function withUnit(title: string, unit: string): string {
  return unit === '' ? title : `${title}, ${unit}`;
}

function testTable(lane: LaneInput, range: TimeRange, zone: string): LaneTable[] {
  if (!lane.tests) return [];
  const when = whenIn(zone);
  const seen = lane.tests.points.filter((point) => point.tMs >= range.fromMs && point.tMs <= range.toMs);
  return [
    {
      id: `${lane.id}-tests`,
      caption: `Tests of ${lane.title.toLowerCase()}`,
      columns: [whenColumn, numeric('value', withUnit('Result', lane.unit)), { key: 'note', title: 'Note', numeric: false }],
      rows: [...seen]
        .sort((a, b) => b.tMs - a.tMs)
        .map((point) => ({
          key: point.id,
          cells: [
            when(point.tMs),
            `${point.below ? 'under ' : ''}${formatNumber(point.value, lane.decimals)}`,
            point.edited ? 'edited' : '',
          ],
        })),
    },
  ];
}

function traceTable(lane: LaneInput, trace: TraceInput, range: TimeRange, zone: string): LaneTable {
  const when = whenIn(zone);
  const { columns } = trace;
  const isRaw = columns.resolutionMs === 0;
  const isSeen = (fromMs: number, toMs: number) => toMs >= range.fromMs && fromMs <= range.toMs;
  const format = (value: number | undefined) => formatNumber(value, lane.decimals);
  const samples = columns.t.flatMap((tMs, i) => {
    if (!isSeen(tMs, tMs + columns.resolutionMs)) return [];
    const spread = isRaw ? [] : [format(columns.min[i]), format(columns.max[i])];
    return [{ tMs, key: String(tMs), cells: [when(tMs), format(columns.mean[i]), ...spread] }];
  });
  const gaps = splitAtGaps(columns)
    .gaps.filter((gap) => isSeen(gap.fromMs, gap.toMs))
    .map((gap) => ({
      tMs: gap.fromMs,
      key: `gap ${gap.fromMs}`,
      cells: [when(gap.fromMs), `no data ${spanWords(gap.toMs - gap.fromMs)}`, ...(isRaw ? [] : ['', ''])],
    }));
  return {
    id: `${lane.id}-${trace.id}`,
    caption: isRaw ? `${trace.label}, every sample` : `${trace.label}, in steps of ${spanWords(columns.resolutionMs)}`,
    columns: [
      whenColumn,
      numeric('mean', withUnit(isRaw ? 'Value' : 'Mean', lane.unit)),
      ...(isRaw ? [] : [numeric('min', 'Least'), numeric('max', 'Most')]),
    ],
    rows: [...samples, ...gaps].sort((a, b) => b.tMs - a.tMs),
  };
}

function doseTable(lane: LaneInput, range: TimeRange, zone: string): LaneTable[] {
  const { doses } = lane;
  if (!doses) return [];
  const isDaily = doses.per === 'day';
  const when = isDaily ? (tMs: number) => DateTime.fromMillis(tMs, { zone }).toFormat('d LLL yyyy') : whenIn(zone);
  const plannedAt = (tMs: number) => doses.steps.filter((step) => step.fromMs <= tMs).at(-1)?.mlPerDay;
  const seen = doses.columns.filter((column) => column.toMs >= range.fromMs && column.fromMs <= range.toMs);
  return [
    {
      id: `${lane.id}-doses`,
      caption: isDaily ? 'Carbon given, by day' : 'Carbon given, by portion',
      columns: [
        isDaily ? { ...whenColumn, title: 'Day' } : whenColumn,
        numeric('pump', 'By pump, mL'),
        numeric('hand', 'By hand, mL'),
        ...(isDaily ? [numeric('planned', 'Planned, mL')] : []),
      ],
      rows: [...seen]
        .sort((a, b) => b.fromMs - a.fromMs)
        .map((column, i) => {
          const planned = plannedAt(column.toMs - 1);
          return {
            key: `${column.fromMs} ${i}`,
            cells: [
              when(column.fromMs),
              formatNumber(column.pumpMl, lane.decimals),
              formatNumber(column.handMl, lane.decimals),
              ...(isDaily ? [planned === undefined ? 'none' : formatNumber(planned, lane.decimals)] : []),
            ],
          };
        }),
    },
  ];
}

/** The table twins of a lane: one for its tests, one for each trace, one for its doses. */
export function laneTables(lane: LaneInput, range: TimeRange, zone: string): LaneTable[] {
  return [
    ...testTable(lane, range, zone),
    ...lane.traces.map((trace) => traceTable(lane, trace, range, zone)),
    ...doseTable(lane, range, zone),
  ];
}
