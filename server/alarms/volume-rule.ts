import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import type { LimitKind } from '#shared/domain/alarm-rules.ts';
import { isWindowClosed, OPEN_WINDOW_MS, openWindowEndsMs } from '#shared/domain/rolling-volume.ts';
import { type LimitNumbers, volumeLimits, type VolumeWindow, volumeWindowMs } from '#shared/domain/volume-limits.ts';
import type { CarbonRecord, CarbonWindow } from './carbon-record.ts';
import type { AlarmRuleModule, Finding, RuleContext } from './finding.ts';
import { roundMl, volumeEvidence } from './volume-evidence.ts';

/** Volumes closer than this are the same, mL: sums of portions are not exact in binary. */
const SAME_ML = 1e-6;

interface WindowEnd {
  endMs: number;
  counted: CarbonWindow;
  limits: LimitNumbers;
}

/** The rule of one rolling window: the carbon of all heads and hands against what was planned in that very window. */
export function volumeRule(code: AlarmCode, window: VolumeWindow): AlarmRuleModule {
  const windowMs = volumeWindowMs[window];

  function numbersOf(context: RuleContext): LimitNumbers {
    const rule = context.ruleFor('system');
    return { softMl: rule.soft, hardMl: rule.hard };
  }

  function measure(carbon: CarbonRecord, endMs: number, numbers: LimitNumbers): WindowEnd {
    const counted = carbon.window(endMs, windowMs);
    return { endMs, counted, limits: volumeLimits(window, counted, numbers) };
  }

  function toFinding(carbon: CarbonRecord, limitKind: LimitKind, end: WindowEnd): Finding {
    const { value, limit } = sides(limitKind, end);
    return {
      target: 'system',
      limitKind,
      excess: value - limit - SAME_ML,
      value: roundMl(value),
      limit: roundMl(limit),
      unit: 'mL',
      trip: { key: 'system', ledgerSeq: newestSeq(carbon, end.endMs, windowMs) },
      headConcerned: null,
      evidence: () => volumeEvidence(carbon, end, windowMs),
    };
  }

  return {
    code,
    windowMs,
    evaluate(context) {
      const carbon = context.carbon();
      const numbers = numbersOf(context);
      const ends = openWindowEndsMs(carbon.instantsMs, context.openFromMs, context.nowMs).map((endMs) => measure(carbon, endMs, numbers));
      return (['soft', 'hard'] as const).flatMap((limitKind) => {
        const worst = worstOf(limitKind, ends);
        return worst === undefined ? [] : [toFinding(carbon, limitKind, worst)];
      });
    },
    evaluateClosed(context, late) {
      const carbon = context.carbon();
      const numbers = numbersOf(context);
      // A portion counts at its due time, which may lie a little before the entry.
      const [first, last] = [Math.min(...late.instantsMs) - OPEN_WINDOW_MS, Math.max(...late.instantsMs)];
      const closed = [...new Set(carbon.instantsMs)].filter(
        (endMs) => endMs >= first && endMs < last + windowMs && isWindowClosed(endMs, context.nowMs),
      );
      const past = closed.flatMap((endMs) => {
        const end = measure(carbon, endMs, numbers);
        // What a pump gave before anybody planned anything is history, not a limit passed.
        const limitKind = isPast('hard', end) ? 'hard' : end.limits.softMl !== null && isPast('soft', end) ? 'soft' : null;
        return limitKind === null ? [] : ([{ limitKind, end }] as const);
      });
      return worstByDay(past).map(({ limitKind, end }) => ({ finding: toFinding(carbon, limitKind, end), atMs: end.endMs }));
    },
    standing(context) {
      const { limits, counted } = measure(context.carbon(), context.nowMs, numbersOf(context));
      return { soft: limits.softMl, hard: limits.hardMl, planned: counted.plannedMl, current: counted.givenMl };
    },
  };
}

/** Without a schedule and a number any pump run passes soft, and one begun on a stopped head passes hard. */
function sides(limitKind: LimitKind, { counted, limits }: WindowEnd): { value: number; limit: number } {
  const limit = limitKind === 'soft' ? limits.softMl : limits.hardMl;
  if (limit !== null) return { value: counted.givenMl, limit };
  return { value: limitKind === 'soft' ? counted.pumpedMl : counted.stoppedMl, limit: 0 };
}

function excessOf(limitKind: LimitKind, end: WindowEnd): number {
  const { value, limit } = sides(limitKind, end);
  return value - limit;
}

const isPast = (limitKind: LimitKind, end: WindowEnd) => excessOf(limitKind, end) > SAME_ML;

function worstOf(limitKind: LimitKind, ends: WindowEnd[]): WindowEnd | undefined {
  return ends.reduce<WindowEnd | undefined>(
    (worst, end) => (worst === undefined || excessOf(limitKind, end) > excessOf(limitKind, worst) ? end : worst),
    undefined,
  );
}

interface Passed {
  limitKind: LimitKind;
  end: WindowEnd;
}

const DAY_MS = 86_400_000;

/** One window a day of UTC: hard before soft, then the one furthest past. */
function worstByDay(past: readonly Passed[]): Passed[] {
  const byDay = new Map<number, Passed>();
  for (const one of past) {
    const day = Math.floor(one.end.endMs / DAY_MS);
    const other = byDay.get(day);
    if (other === undefined || isWorse(one, other)) byDay.set(day, one);
  }
  return [...byDay.values()];
}

function isWorse(one: Passed, other: Passed): boolean {
  if (one.limitKind !== other.limitKind) return one.limitKind === 'hard';
  return excessOf(one.limitKind, one.end) > excessOf(other.limitKind, other.end);
}

function newestSeq(carbon: CarbonRecord, endMs: number, windowMs: number): number {
  const counted = carbon.entries.filter((entry) => entry.ml > 0 && entry.atMs > endMs - windowMs && entry.atMs <= endMs);
  return counted.reduce((newest, entry) => Math.max(newest, entry.seq), 0);
}
