import { uuidv7 } from 'uuidv7';
import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import { delayStep, isPast } from '#shared/domain/alarm-delay.ts';
import { afterEvent, type AlarmEvent, normalFlags } from '#shared/domain/alarm-life-cycle.ts';
import { type LimitKind, priorityOf } from '#shared/domain/alarm-rules.ts';
import { systemActor } from '../audit/record-audit.ts';
import type { Transaction } from '../db/writer.ts';
import { type AlarmRow, columnsOf, flagsOf } from './alarm-row.ts';
import { insertAlarm, lastTripSeq, updateAlarm, updateMeasure } from './alarm-store.ts';
import type { EffectiveRule } from './effective-rule.ts';
import type { Finding } from './finding.ts';
import { type PendingRow, savePending } from './pending.ts';
import type { InterlockStop } from './stop-port.ts';

/** One limit of one target: what was found, and what stands of it. */
export interface LimitNow {
  siteId: string;
  systemId: string;
  code: AlarmCode;
  target: string;
  limitKind: LimitKind;
  rule: EffectiveRule;
  finding: Finding | undefined;
  open: AlarmRow | undefined;
  pending: PendingRow | undefined;
  nowMs: number;
}

/**
 * Brings the alarm of one limit up to what was found.
 * @returns the stop that an interlock asks for, when it tripped now.
 */
export function settleLimit(tx: Transaction, now: LimitNow): InterlockStop | null {
  const { rule, finding, open, nowMs } = now;
  const isActive = open?.active === 1;
  const isInterlock = rule.interlock && now.limitKind === 'hard';
  const isPastLimit = rule.enabled && finding !== undefined && isPast(finding.excess, rule.deadband, isActive);

  const before = now.pending ?? null;
  const conditionHolds = isPastLimit && (isActive || bringsMore(tx, now, finding));
  const delays = { onDelayMs: rule.onDelaySeconds * 1000, offDelayMs: rule.offDelaySeconds * 1000 };
  const step = delayStep({ isActive, conditionHolds, pending: before, nowMs }, delays);
  savePending(tx, now, before, step.pending);

  if (step.event === 'return' && open !== undefined) {
    applyEvent(tx, now, open, 'return', isInterlock);
    return null;
  }
  if (finding === undefined || !isPastLimit) return null;
  if (step.event === 'occur') return trip(tx, now, finding, 'occur', isInterlock);
  if (!isActive || open === undefined) return null;
  if (isInterlock && tripsAnew(open, finding)) return trip(tx, now, finding, 're-alarm', isInterlock);
  if (finding.value !== null && finding.value > (open.value ?? -Infinity)) {
    updateMeasure(tx, open, { ...measureOf(now, finding), tripSeq: Math.max(open.tripSeq, finding.trip?.ledgerSeq ?? 0) }, nowMs);
  }
  return null;
}

/** The same volume never trips twice: not when its windows come and go, not after a reset. */
function bringsMore(tx: Transaction, now: LimitNow, finding: Finding): boolean {
  if (finding.trip === null) return true;
  const lastSeq = lastTripSeq(tx, {
    systemId: now.systemId,
    code: now.code,
    target: now.target,
    limitKind: now.limitKind,
    tripKey: finding.trip.key,
  });
  return lastSeq === null || finding.trip.ledgerSeq > lastSeq;
}

/** An interlock that stands trips again by another cause, or, once it was reset, by more volume. */
function tripsAnew(open: AlarmRow, { trip }: Finding): boolean {
  if (trip === null) return false;
  if (trip.key !== open.tripKey) return true;
  return open.latched === 0 && trip.ledgerSeq > open.tripSeq;
}

function measureOf({ rule }: LimitNow, finding: Finding): Pick<AlarmRow, 'value' | 'limitValue' | 'evidence'> {
  const evidence = { ...finding.evidence(), ruleRevision: rule.revision };
  return { value: finding.value, limitValue: finding.limit, evidence: JSON.stringify(evidence) };
}

function trip(tx: Transaction, now: LimitNow, finding: Finding, event: 'occur' | 're-alarm', isInterlock: boolean): InterlockStop | null {
  const { open, nowMs } = now;
  const tripped = { tripKey: finding.trip?.key ?? '', tripSeq: finding.trip?.ledgerSeq ?? 0 };
  const alarmId = open?.id ?? uuidv7();
  if (open === undefined)
    insertAlarm(tx, newAlarm(now, finding, alarmId, isInterlock, tripped), { action: event, actor: systemActor, nowMs });
  else {
    const priority = priorityOf(now.code, now.limitKind, now.rule.priority);
    const again = { ...measureOf(now, finding), ...tripped, unit: finding.unit, priority, interlock: isInterlock ? 1 : 0 };
    applyEvent(tx, now, open, event, isInterlock, again);
  }
  if (!isInterlock) return null;
  return { siteId: now.siteId, systemId: now.systemId, cause: 'interlock', alarmId, headConcerned: finding.headConcerned, nowMs };
}

function newAlarm(
  now: LimitNow,
  finding: Finding,
  id: string,
  isInterlock: boolean,
  tripped: Pick<AlarmRow, 'tripKey' | 'tripSeq'>,
): AlarmRow {
  const { siteId, systemId, code, target, limitKind, rule, nowMs } = now;
  const flags = afterEvent(normalFlags, 'occur', isInterlock) ?? normalFlags;
  return {
    id,
    siteId,
    systemId,
    code,
    target,
    limitKind,
    priority: priorityOf(code, limitKind, rule.priority),
    interlock: isInterlock ? 1 : 0,
    shelvedUntilMs: null,
    raisedAtMs: nowMs,
    returnedAtMs: null,
    closedAtMs: null,
    active: flags.active ? 1 : 0,
    acknowledged: flags.acknowledged ? 1 : 0,
    latched: flags.latched ? 1 : 0,
    unit: finding.unit,
    takenBy: null,
    arriveAtMs: null,
    ...measureOf(now, finding),
    ...tripped,
  };
}

function applyEvent(
  tx: Transaction,
  { nowMs }: LimitNow,
  open: AlarmRow,
  event: AlarmEvent,
  isInterlock: boolean,
  changes: Partial<AlarmRow> = {},
): void {
  const flags = afterEvent(flagsOf(open), event, isInterlock);
  if (flags === null) return;
  updateAlarm(tx, open, { ...changes, ...columnsOf(flags, open, nowMs) }, { action: event, actor: systemActor, nowMs });
}
