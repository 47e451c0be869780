import { OPEN_WINDOW_MS } from '#shared/domain/rolling-volume.ts';
import { afterEvent } from '#shared/domain/alarm-life-cycle.ts';
import { systemActor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { columnsOf, flagsOf } from './alarm-row.ts';
import { openAlarms, updateAlarm } from './alarm-store.ts';
import { loadCarbonRecord, type CarbonRecord } from './carbon-record.ts';
import { effectiveRules } from './effective-rule.ts';
import type { Watch } from './evaluator-lease.ts';
import type { AlarmRuleModule, Finding, RuleContext } from './finding.ts';
import { missingStop } from './keep-stopped.ts';
import { loadPending } from './pending.ts';
import { settleLimit } from './settle-limit.ts';
import type { InterlockStop, StopPort } from './stop-port.ts';

export interface EvaluationInput {
  systemId: string;
  nowMs: number;
  /** Windows that ended after this still count. */
  openFromMs: number;
  watch: Watch;
  modules: readonly AlarmRuleModule[];
}

export interface EvaluationResult {
  stops: InterlockStop[];
  /** A rule that fails keeps the others working; the caller tells and tries again. */
  failures: { code: string; error: unknown }[];
}

function longestWindowMs(modules: readonly AlarmRuleModule[]): number {
  return Math.max(0, ...modules.map((module) => module.windowMs));
}

/**
 * Everything a rule may look at, with the carbon loaded at most once. Null for a system that does not exist.
 * @param ends the window ends that will be asked for.
 */
export function ruleContext(
  tx: Transaction,
  input: EvaluationInput,
  ends: { fromMs: number; toMs: number },
): Omit<RuleContext, 'ruleFor'> | null {
  const { systemId, nowMs, openFromMs, watch, modules } = input;
  const system = tx.first(query.selectFrom('system').select('siteId').where('id', '=', systemId));
  if (system === undefined) return null;
  let carbon: CarbonRecord | undefined;
  return {
    tx,
    siteId: system.siteId,
    systemId,
    nowMs,
    openFromMs,
    watch,
    carbon: () => (carbon ??= loadCarbonRecord(tx, systemId, ends.fromMs - longestWindowMs(modules), ends.toMs)),
  };
}

/** Evaluates every rule of a system and brings its alarms up to date, stops included, in the transaction given. */
export function evaluateSystem(tx: Transaction, input: EvaluationInput, port: StopPort): EvaluationResult {
  const result: EvaluationResult = { stops: [], failures: [] };
  // Ahead of now as well: a pump whose clock runs a little fast reports what is in the water already.
  const shared = ruleContext(tx, input, { fromMs: input.openFromMs, toMs: input.nowMs + OPEN_WINDOW_MS });
  if (shared === null) return result;
  endShelves(tx, input);
  const { systemId, nowMs } = input;
  const { siteId } = shared;
  const ruleOf = effectiveRules(tx, systemId);
  const open = openAlarms(tx, systemId);
  const pendings = loadPending(tx, systemId);

  for (const module of input.modules) {
    const { code } = module;
    let findings: Finding[];
    try {
      findings = module.evaluate({ ...shared, ruleFor: (target) => ruleOf(code, target) });
    } catch (error) {
      result.failures.push({ code, error });
      continue;
    }
    const mine = { open: open.filter((row) => row.code === code), pendings: pendings.filter((row) => row.code === code) };
    for (const { target, limitKind } of limitsOf(findings, mine.open, mine.pendings)) {
      const isIt = (one: { target: string; limitKind: string }) => one.target === target && one.limitKind === limitKind;
      const finding = findings.find(isIt);
      const parts = { finding, open: mine.open.find(isIt), pending: mine.pendings.find(isIt) };
      const stop = settleLimit(tx, { siteId, systemId, code, target, limitKind, rule: ruleOf(code, target), nowMs, ...parts });
      if (stop !== null) result.stops.push(stop);
    }
  }
  for (const stop of distinctStops(result.stops)) port.stopHeads(tx, stop);
  const missing = missingStop(tx, { siteId, systemId, nowMs });
  if (missing !== null) {
    port.stopHeads(tx, missing);
    result.stops.push(missing);
  }
  return result;
}

/** One stop for each head concerned: several limits passed at once ask for the same. */
function distinctStops(stops: InterlockStop[]): InterlockStop[] {
  const keyOf = (stop: InterlockStop) => JSON.stringify(stop.headConcerned);
  return stops.filter((stop, index) => stops.findIndex((other) => keyOf(other) === keyOf(stop)) === index);
}

type Limit = Pick<Finding, 'target' | 'limitKind'>;

/** Each limit once that was measured, stands or waits. */
function limitsOf(...lists: readonly Limit[][]): Limit[] {
  return [...new Map(lists.flat().map((one) => [`${one.limitKind} ${one.target}`, one])).values()];
}

function endShelves(tx: Transaction, { systemId, nowMs }: EvaluationInput): void {
  for (const row of openAlarms(tx, systemId)) {
    if (row.shelvedUntilMs === null || row.shelvedUntilMs > nowMs) continue;
    const flags = afterEvent(flagsOf(row), 'unshelve', row.interlock === 1);
    if (flags === null) continue;
    updateAlarm(tx, row, { ...columnsOf(flags, row, nowMs), shelvedUntilMs: null }, { action: 'unshelve', actor: systemActor, nowMs });
  }
}
