import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import type { LimitKind } from '#shared/domain/alarm-rules.ts';
import type { Transaction } from '../db/writer.ts';
import type { CarbonRecord } from './carbon-record.ts';
import type { EffectiveRule } from './effective-rule.ts';
import type { Watch } from './evaluator-lease.ts';
import type { HeadAddress } from './stop-port.ts';

/** What a rule measured for one target and one limit, whether past the limit or not. */
export interface Finding {
  /** `system`, `head:<id>`, `device:<id>`. */
  target: string;
  limitKind: LimitKind;
  /** How far past the limit, in the unit of the rule: above 0 is past. */
  excess: number;
  value: number | null;
  limit: number | null;
  unit: string;
  /** What tripped it, and the newest ledger entry behind it: the same cause trips again only with more volume. */
  trip: { key: string; ledgerSeq: number } | null;
  /** A head that must stop even when nobody registered it. */
  headConcerned: HeadAddress | null;
  /** Facts that the finding rests on; made only when they are written down. */
  evidence(): Record<string, unknown>;
}

/** What a rule may look at: rows, through the transaction in which its alarm is written. */
export interface RuleContext {
  tx: Transaction;
  siteId: string;
  systemId: string;
  nowMs: number;
  /** Windows that ended after this still count. */
  openFromMs: number;
  /** Since when the server has been watching without a break, and which pumps it has heard since. */
  watch: Watch;
  ruleFor(target: string): EffectiveRule;
  /** The carbon given and planned, loaded once for all rules that ask. */
  carbon(): CarbonRecord;
}

/** One alarm code. To add one: a file in `rules/` and a line in `rules/registry.ts`. */
export interface AlarmRuleModule {
  code: AlarmCode;
  /** How far back the rule looks, ms; 0 for the present state only. */
  windowMs: number;
  evaluate(context: RuleContext): Finding[];
  /** Findings of windows that were closed already when their data arrived. Absent where late data mean nothing. */
  evaluateClosed?(context: RuleContext, late: LateDoses): ClosedFinding[];
  /** Limits and value of the window that ends now; absent where the rule counts nothing. */
  standing?(context: RuleContext): Standing;
}

/** Ledger entries of one system that arrived after the windows that end with them had closed. */
export interface LateDoses {
  instantsMs: number[];
  /** Sources of the entries, as `sourceKind:sourceId`. */
  sources: ReadonlySet<string>;
}

export interface ClosedFinding {
  finding: Finding;
  /** When it would have gone off. */
  atMs: number;
}

export interface Standing {
  soft: number | null;
  hard: number | null;
  /** What the schedules planned in the window, and what was given in it. */
  planned: number;
  current: number;
}
