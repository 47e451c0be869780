import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import { alarmRuleDefaults, mainPriority } from '#shared/domain/alarm-rules.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

type RuleRow = Row<'alarmRule'>;

/** A rule as it holds now: the row of a keeper, or the defaults. Revision 0 is the defaults. */
export type EffectiveRule = Pick<
  RuleRow,
  'target' | 'priority' | 'soft' | 'hard' | 'unit' | 'onDelaySeconds' | 'offDelaySeconds' | 'deadband' | 'revision'
> & { code: AlarmCode; enabled: boolean; interlock: boolean };

export function defaultRule(code: AlarmCode, target: string): EffectiveRule {
  const { interlock, unit, onDelaySeconds, offDelaySeconds, deadband } = alarmRuleDefaults[code];
  const priority = mainPriority(code);
  return {
    code,
    target,
    enabled: true,
    priority,
    soft: null,
    hard: null,
    unit,
    interlock,
    onDelaySeconds,
    offDelaySeconds,
    deadband,
    revision: 0,
  };
}

export function fromRuleRow(row: RuleRow, code: AlarmCode): EffectiveRule {
  const { target, priority, soft, hard, unit, onDelaySeconds, offDelaySeconds, deadband, revision } = row;
  const flags = { enabled: row.enabled === 1, interlock: row.interlock === 1 };
  return { code, target, priority, soft, hard, unit, onDelaySeconds, offDelaySeconds, deadband, revision, ...flags };
}

/** Finds the rule of a code for a target: its own, else that of the system, else the defaults. */
export function effectiveRules(tx: Transaction, systemId: string): (code: AlarmCode, target: string) => EffectiveRule {
  const rows = tx.all(query.selectFrom('alarmRule').selectAll().where('systemId', '=', systemId));
  return (code, target) => {
    const row =
      rows.find((candidate) => candidate.code === code && candidate.target === target) ??
      rows.find((candidate) => candidate.code === code && candidate.target === 'system');
    return row === undefined ? defaultRule(code, target) : fromRuleRow(row, code);
  };
}
