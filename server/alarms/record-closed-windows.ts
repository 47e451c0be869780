import { uuidv7 } from 'uuidv7';
import { priorityOf } from '#shared/domain/alarm-rules.ts';
import { OPEN_WINDOW_MS } from '#shared/domain/rolling-volume.ts';
import { sql } from 'kysely';
import { systemActor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { insertAlarm } from './alarm-store.ts';
import { effectiveRules } from './effective-rule.ts';
import { ruleContext } from './evaluate-system.ts';
import type { Watch } from './evaluator-lease.ts';
import type { AlarmRuleModule, ClosedFinding, LateDoses } from './finding.ts';

const DAY_MS = 86_400_000;

/** Ledger entries looked at in one go, so that the upload of a long history never holds the writer for long. */
const CHUNK = 500;

export interface ClosedWindowsResult {
  /** The ledger up to here is done. */
  cursorSeq: number;
  isMore: boolean;
}

/**
 * Looks at the doses that arrived after the windows that end with them had closed: what would have gone off is
 * recorded as an alarm that is over, at most one for a code and day, and neither calls nor stops anybody.
 */
export function recordClosedWindows(
  tx: Transaction,
  input: { cursorSeq: number; nowMs: number; watch: Watch; modules: readonly AlarmRuleModule[] },
): ClosedWindowsResult {
  const late = tx.all(
    query
      .selectFrom('doseLedger')
      .selectAll()
      .where('seq', '>', input.cursorSeq)
      .where('kind', '=', 'carbon')
      .where(sql<boolean>`"atMs" <= "receivedMs" - ${OPEN_WINDOW_MS}`)
      .orderBy('seq')
      .limit(CHUNK),
  );
  const isMore = late.length === CHUNK;
  const newest = isMore
    ? late.at(-1)?.seq
    : tx.first(query.selectFrom('doseLedger').select((select) => select.fn.max('seq').as('seq')))?.seq;
  for (const [systemId, rows] of bySystem(late)) recordSystem(tx, systemId, rows, input);
  return { cursorSeq: newest ?? input.cursorSeq, isMore };
}

function bySystem(rows: Row<'doseLedger'>[]): Map<string, Row<'doseLedger'>[]> {
  const grouped = new Map<string, Row<'doseLedger'>[]>();
  for (const row of rows) grouped.set(row.systemId, [...(grouped.get(row.systemId) ?? []), row]);
  return grouped;
}

function recordSystem(
  tx: Transaction,
  systemId: string,
  rows: Row<'doseLedger'>[],
  input: { nowMs: number; watch: Watch; modules: readonly AlarmRuleModule[] },
): void {
  const instantsMs = rows.map((row) => row.atMs);
  const late: LateDoses = { instantsMs, sources: new Set(rows.map((row) => `${row.sourceKind}:${row.sourceId}`)) };
  const longestMs = Math.max(0, ...input.modules.map((module) => module.windowMs));
  const ends = { fromMs: Math.min(...instantsMs) - OPEN_WINDOW_MS, toMs: Math.min(input.nowMs, Math.max(...instantsMs) + longestMs) };
  const shared = ruleContext(tx, { ...input, systemId, openFromMs: input.nowMs - OPEN_WINDOW_MS }, ends);
  if (shared === null) return;
  const ruleOf = effectiveRules(tx, systemId);
  for (const module of input.modules) {
    if (module.evaluateClosed === undefined) continue;
    const { code } = module;
    for (const closed of module.evaluateClosed({ ...shared, ruleFor: (target) => ruleOf(code, target) }, late)) {
      const rule = ruleOf(code, closed.finding.target);
      if (!rule.enabled || hasAlarmOfDay(tx, systemId, code, closed.atMs)) continue;
      insertRecorded(tx, { siteId: shared.siteId, systemId, code, nowMs: input.nowMs, rule }, closed);
    }
  }
}

function hasAlarmOfDay(tx: Transaction, systemId: string, code: string, atMs: number): boolean {
  const dayMs = Math.floor(atMs / DAY_MS) * DAY_MS;
  const there = tx.first(
    query
      .selectFrom('alarm')
      .select('id')
      .where('systemId', '=', systemId)
      .where('code', '=', code)
      .where('raisedAtMs', '>=', dayMs)
      .where('raisedAtMs', '<', dayMs + DAY_MS),
  );
  return there !== undefined;
}

type Place = {
  siteId: string;
  systemId: string;
  code: AlarmRuleModule['code'];
  nowMs: number;
  rule: ReturnType<ReturnType<typeof effectiveRules>>;
};

function insertRecorded(tx: Transaction, { siteId, systemId, code, nowMs, rule }: Place, { finding, atMs }: ClosedFinding): void {
  const { target, limitKind, value, limit, unit } = finding;
  const evidence = { ...finding.evidence(), ruleRevision: rule.revision, recordedOnly: true };
  insertAlarm(
    tx,
    {
      id: uuidv7(),
      siteId,
      systemId,
      code,
      target,
      limitKind,
      priority: priorityOf(code, limitKind, rule.priority),
      interlock: 0,
      shelvedUntilMs: null,
      raisedAtMs: atMs,
      returnedAtMs: atMs,
      closedAtMs: nowMs,
      active: 0,
      acknowledged: 1,
      latched: 0,
      value,
      limitValue: limit,
      unit,
      evidence: JSON.stringify(evidence),
      takenBy: null,
      arriveAtMs: null,
      // Nothing was tripped, so that it holds no later alarm back.
      tripKey: 'recorded',
      tripSeq: 0,
    },
    { action: 'record', actor: systemActor, nowMs },
  );
}
