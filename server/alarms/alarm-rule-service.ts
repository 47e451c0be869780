import { uuidv7 } from 'uuidv7';
import type { z } from 'zod';
import { type AlarmRule, type alarmRuleBodySchema, alarmCodeSchema } from '#shared/contract/alarms.ts';
import { type AlarmCode, alarmCodes } from '#shared/domain/alarm-codes.ts';
import { hardAtCeilingMl } from '#shared/domain/volume-limits.ts';
import { OPEN_WINDOW_MS } from '#shared/domain/rolling-volume.ts';
import type { Role } from '#shared/domain/role.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { markDirty } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { NotFoundError } from '../errors.ts';
import { carbonCeilingMlPerDay } from './carbon-ceiling.ts';
import { checkInterlockKept, checkRule, checkTarget } from './check-rule.ts';
import { defaultRule, type EffectiveRule, fromRuleRow } from './effective-rule.ts';
import { ruleContext } from './evaluate-system.ts';
import type { AlarmRuleModule, RuleContext, Standing } from './finding.ts';
import { roundMl } from './volume-evidence.ts';

export type AlarmRuleBody = z.output<typeof alarmRuleBodySchema>;

export interface AlarmRuleService {
  /** Every rule of a system, defaults included. @throws {NotFoundError} */
  list(systemId: string): Promise<AlarmRule[]>;
  /** Sets a rule; what the body leaves out is the default. @throws {BadInputError} {@link RuleError} {@link NotFoundError} */
  put(systemId: string, code: AlarmCode, body: AlarmRuleBody, by: { userId: string; role: Role }): Promise<AlarmRule>;
}

export function createAlarmRuleService({ writer, clock }: Core, modules: readonly AlarmRuleModule[]): AlarmRuleService {
  function contextOf(tx: Transaction, systemId: string): Omit<RuleContext, 'ruleFor'> {
    const nowMs = clock.nowMs();
    const watch = { backMs: nowMs, heardAgainMs: () => nowMs };
    const input = { systemId, nowMs, openFromMs: nowMs - OPEN_WINDOW_MS, watch, modules };
    const context = ruleContext(tx, input, { fromMs: nowMs, toMs: nowMs });
    if (context === null) throw new NotFoundError('There is no such system');
    return context;
  }

  function standingOf(context: Omit<RuleContext, 'ruleFor'>, rule: EffectiveRule): Standing | undefined {
    const module = modules.find((one) => one.code === rule.code);
    return module?.standing?.({ ...context, ruleFor: () => rule });
  }

  function present(context: Omit<RuleContext, 'ruleFor'>, rule: EffectiveRule): AlarmRule {
    const standing = standingOf(context, rule);
    const fromPlan = rule.soft === null && rule.hard === null ? standing : standingOf(context, { ...rule, soft: null, hard: null });
    const { code, target, enabled, priority, soft, hard, unit, interlock, onDelaySeconds, offDelaySeconds, deadband } = rule;
    return {
      ...{ code, target, enabled, priority, soft, hard, unit, interlock, onDelaySeconds, offDelaySeconds, deadband },
      isDefault: isSame(rule, defaultRule(code, target)),
      effectiveSoft: shownMl(standing?.soft),
      effectiveHard: shownMl(standing?.hard),
      fromSchedule:
        fromPlan === undefined ? null : { planned: roundMl(fromPlan.planned), soft: shownMl(fromPlan.soft), hard: shownMl(fromPlan.hard) },
      current: shownMl(standing?.current),
    };
  }

  return {
    list: (systemId) =>
      writer.commit((tx) => {
        const context = contextOf(tx, systemId);
        const rows = tx.all(query.selectFrom('alarmRule').selectAll().where('systemId', '=', systemId).orderBy('target'));
        const rules = alarmCodes.flatMap((code) => {
          const own = rows.filter((row) => row.code === code).map((row) => fromRuleRow(row, alarmCodeSchema.parse(row.code)));
          return own.some((rule) => rule.target === 'system') ? own : [defaultRule(code, 'system'), ...own];
        });
        return rules.map((rule) => present(context, rule));
      }),

    put: (systemId, code, body, by) =>
      writer.commit((tx) => {
        const context = contextOf(tx, systemId);
        checkTarget(tx, systemId, code, body.target);
        const row = ruleRow(tx, systemId, code, body.target);
        const inherited = row ?? ruleRow(tx, systemId, code, 'system');
        const before = inherited === undefined ? defaultRule(code, body.target) : fromRuleRow(inherited, code);
        const rule = fromBody(code, body, (row?.revision ?? 0) + 1);
        const planned = standingOf(context, { ...rule, soft: null, hard: null });
        checkRule(rule, body, planned);
        checkInterlockKept(before, rule, by.role, {
          mostHard: planned?.hard ?? hardFromCeiling(code, carbonCeilingMlPerDay(tx, systemId)),
        });
        if (row !== undefined && isSame(before, rule)) return present(context, before);
        save(tx, { rule, id: row?.id ?? uuidv7(), siteId: context.siteId, systemId, userId: by.userId, nowMs: context.nowMs });
        recordAudit(tx, {
          atMs: context.nowMs,
          siteId: context.siteId,
          actor: { kind: 'user', id: by.userId },
          action: 'update',
          entity: 'alarmRule',
          entityId: `${systemId}/${code}/${body.target}`,
          before,
          after: rule,
        });
        markDirty(tx, systemId, context.nowMs);
        return present(context, rule);
      }),
  };
}

/** Only volumes are counted and limited by number. */
const shownMl = (ml: number | null | undefined) => (ml === null || ml === undefined ? null : roundMl(ml));

/** Without a schedule the label still tells how much is too much in a day or a week. */
function hardFromCeiling(code: AlarmCode, ceilingMlPerDay: number | null): number | null {
  if (ceilingMlPerDay === null) return null;
  if (code === 'volume-day') return hardAtCeilingMl('day', ceilingMlPerDay);
  return code === 'volume-week' ? hardAtCeilingMl('week', ceilingMlPerDay) : null;
}

function ruleRow(tx: Transaction, systemId: string, code: AlarmCode, target: string) {
  return tx.first(
    query.selectFrom('alarmRule').selectAll().where('systemId', '=', systemId).where('code', '=', code).where('target', '=', target),
  );
}

function fromBody(code: AlarmCode, body: AlarmRuleBody, revision: number): EffectiveRule {
  const fallback = defaultRule(code, body.target);
  return {
    ...fallback,
    enabled: body.enabled,
    soft: body.soft,
    hard: body.hard,
    priority: body.priority ?? fallback.priority,
    interlock: body.interlock ?? fallback.interlock,
    onDelaySeconds: body.onDelaySeconds ?? fallback.onDelaySeconds,
    offDelaySeconds: body.offDelaySeconds ?? fallback.offDelaySeconds,
    deadband: body.deadband ?? fallback.deadband,
    revision,
  };
}

function isSame(a: EffectiveRule, b: EffectiveRule): boolean {
  const comparable = (rule: EffectiveRule) => JSON.stringify({ ...rule, revision: 0, target: '' }, Object.keys(rule).sort());
  return comparable(a) === comparable(b);
}

interface Saved {
  rule: EffectiveRule;
  id: string;
  siteId: string;
  systemId: string;
  userId: string;
  nowMs: number;
}

function save(tx: Transaction, { rule, id, siteId, systemId, userId, nowMs }: Saved): void {
  const columns = { ...rule, enabled: rule.enabled ? 1 : 0, interlock: rule.interlock ? 1 : 0, updatedAtMs: nowMs };
  tx.run(
    query
      .insertInto('alarmRule')
      .values({ id, siteId, systemId, ...columns })
      .onConflict((conflict) => conflict.column('id').doUpdateSet(columns)),
  );
  const body = JSON.stringify(rule);
  tx.run(query.insertInto('alarmRuleRevision').values({ ruleId: id, revision: rule.revision, siteId, body, atMs: nowMs, actorId: userId }));
}
