import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import { comparePriority } from '#shared/domain/alarm-priority.ts';
import { alarmRuleDefaults, mainPriority, type TargetKind } from '#shared/domain/alarm-rules.ts';
import { isAtLeast, type Role } from '#shared/domain/role.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, type FieldError, RuleError } from '../errors.ts';
import type { EffectiveRule } from './effective-rule.ts';
import type { Standing } from './finding.ts';

/**
 * Refuses what a rule of its code cannot say.
 * @param planned limits by the plan alone, so that a number stays on the right side of a computed one.
 * @throws {BadInputError}
 */
export function checkRule(rule: EffectiveRule, given: { unit?: string | undefined }, planned: Standing | undefined): void {
  const { unit, takesNumbers, interlock } = alarmRuleDefaults[rule.code];
  const errors: FieldError[] = [];
  const refuse = (path: string, message: string) => errors.push({ path, message });
  if (given.unit !== undefined && given.unit !== unit) refuse('unit', `This limit is kept in ${unit}`);
  if (!takesNumbers) {
    if (rule.soft !== null) refuse('soft', 'This alarm has no number to set; leave it null');
    if (rule.hard !== null) refuse('hard', 'This alarm has no number to set; leave it null');
    if (rule.deadband > 0) refuse('deadband', 'This alarm has no value to fall back; leave it 0');
  }
  if (rule.interlock && !interlock) refuse('interlock', 'This alarm cannot stop pumps');
  if (rule.soft !== null && rule.hard === null && planned?.hard != null && rule.soft >= planned.hard) {
    refuse('soft', `The soft limit must be under the hard limit, which comes from the plan: ${shown(planned.hard)} ${unit} now`);
  }
  if (rule.hard !== null && rule.soft === null && planned?.soft != null && rule.hard <= planned.soft) {
    refuse('hard', `The hard limit must be over the soft limit, which comes from the plan: ${shown(planned.soft)} ${unit} now; set both`);
  }
  if (errors.length > 0) throw new BadInputError(errors);
}

const shown = (value: number) => String(Math.round(value * 1000) / 1000);

/** The most that a hard limit may be without an owner: what comes from the plan, or what the label's dose comes to. */
interface KeptUnder {
  /** In the unit of the rule; null when nothing tells. */
  mostHard: number | null;
}

/** Screens show limits in hundredths: one that is typed as it is shown is the same. */
const SAME = 0.005;
const DEADBAND_SHARE = 0.1;

/**
 * Only an owner may take the teeth out of an alarm that stops pumps: switch it off, let it stop nothing, delay it, have it
 * press less, put its hard limit above what the plan or the label gives, or let it hang on by a wide deadband.
 * @throws {RuleError} `interlock-owner-only`
 */
export function checkInterlockKept(before: EffectiveRule, after: EffectiveRule, role: Role, { mostHard }: KeptUnder): void {
  if (!alarmRuleDefaults[after.code].interlock || isAtLeast(role, 'owner')) return;
  const loosened =
    (before.enabled && !after.enabled) ||
    (before.interlock && !after.interlock) ||
    after.onDelaySeconds > before.onDelaySeconds ||
    (comparePriority(after.priority, before.priority) < 0 && comparePriority(after.priority, mainPriority(after.code)) < 0);
  if (loosened) {
    throw new RuleError(
      'interlock-owner-only',
      'This alarm stops the pumps. Only an owner can switch it off, delay it, lower it or let it stop nothing',
    );
  }
  const isHardKept = after.hard === before.hard;
  if (!isHardKept && after.hard !== null && mostHard !== null && after.hard > mostHard + SAME) {
    throw new RuleError(
      'interlock-owner-only',
      `This alarm stops the pumps. Only an owner can set its hard limit above ${shown(mostHard)} ${after.unit}, which the plan and the label give`,
    );
  }
  const hard = after.hard ?? mostHard;
  const isDeadbandKept = isHardKept && after.deadband === before.deadband;
  if (!isDeadbandKept && hard !== null && after.deadband > DEADBAND_SHARE * hard + SAME) {
    throw new RuleError(
      'interlock-owner-only',
      `This alarm stops the pumps. Only an owner can set its deadband above a tenth of the hard limit, ${shown(DEADBAND_SHARE * hard)} ${after.unit}`,
    );
  }
}

/** @throws {BadInputError} for a target that the code does not take, or that is no part of the system. */
export function checkTarget(tx: Transaction, systemId: string, code: AlarmCode, target: string): void {
  const { kind, id } = parseTarget(target);
  const { targets } = alarmRuleDefaults[code];
  const isTaken = kind !== null && targets.includes(kind);
  if (isTaken && (kind === 'system' || isPartOf(tx, systemId, kind, id))) return;
  const forms = targets.map((one) => (one === 'system' ? 'system' : `${one}:<id of a ${one} of this system>`)).join(' or ');
  throw new BadInputError([{ path: 'target', message: `Give ${forms}` }]);
}

function parseTarget(target: string): { kind: TargetKind | null; id: string } {
  if (target === 'system') return { kind: 'system', id: '' };
  const [word, id = ''] = target.split(':');
  return { kind: word === 'head' || word === 'device' ? word : null, id };
}

function isPartOf(tx: Transaction, systemId: string, kind: 'head' | 'device', id: string): boolean {
  const part =
    kind === 'device'
      ? query.selectFrom('device').select('id').where('id', '=', id).where('systemId', '=', systemId)
      : query.selectFrom('headAssignment').select('id').where('headId', '=', id).where('systemId', '=', systemId).where('toMs', 'is', null);
  return tx.first(part) !== undefined;
}
