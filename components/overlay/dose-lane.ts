import type { HandDose } from '#shared/contract/records.ts';
import type { DoseColumns, Run } from '#shared/contract/telemetry.ts';
import { millilitreDecimals } from '../../lib/format/millilitres.ts';
import type { DoseColumn, DoseInput } from '../charts/dose-bars.ts';
import type { LaneInput } from '../charts/lane-model.ts';
import { spanOf, type TimeRange } from '../charts/time-axis.ts';
import { dosesByDay, dosesByPortion } from './dose-days.ts';

/** Up to this span single portions can be told apart; beyond it a day is one column. */
const portionsUpToMs = 3 * 86_400_000;

export function showsPortions(range: TimeRange): boolean {
  return spanOf(range) <= portionsUpToMs * 1.01;
}

export interface DoseData {
  readonly doses: DoseColumns | undefined;
  readonly runs: readonly Run[] | undefined;
  readonly handDoses: readonly HandDose[];
}

function doseInput(data: DoseData, isNear: boolean, zone: string): DoseInput {
  if (isNear && data.runs !== undefined) return { per: 'portion', columns: dosesByPortion(data.runs, data.handDoses), steps: [] };
  const steps = (data.doses?.planned ?? []).map((step) => ({ fromMs: step.fromT, mlPerDay: step.mlPerDay }));
  return { per: 'day', columns: data.doses ? dosesByDay(data.doses, zone) : [], steps };
}

/** The smallest amount decides the decimals, so that a portion of 0.35 mL is not shown as 0.3. */
function decimalsOf(columns: readonly DoseColumn[]): number {
  const amounts = columns.flatMap((column) => [column.pumpMl, column.handMl]).filter((ml) => ml > 0);
  return amounts.reduce((most, ml) => Math.max(most, millilitreDecimals(ml)), 1);
}

/** The carbon that was given: by portion when near, by day when far, with the planned dose as steps. */
export function doseLane(data: DoseData, isNear: boolean, zone: string): LaneInput {
  const doses = doseInput(data, isNear, zone);
  return {
    id: 'dose',
    title: doses.per === 'portion' ? 'Carbon, by portion' : 'Carbon, by day',
    unit: 'mL',
    decimals: decimalsOf(doses.columns),
    fromZero: true,
    leastSpan: 0.1,
    band: null,
    limits: [],
    traces: [],
    tests: null,
    doses,
  };
}
