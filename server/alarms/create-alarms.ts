import type { AlarmState } from '#shared/domain/alarm-life-cycle.ts';
import type { Core } from '../core.ts';
import type { PageRequest } from '../db/seek.ts';
import { type AlarmActions, createAlarmActions } from './alarm-actions.ts';
import { type AlarmScope, getAlarm, listAlarms, type ListedAlarm } from './alarm-lists.ts';
import { type AlarmRuleService, createAlarmRuleService } from './alarm-rule-service.ts';
import { createEvaluator, type Evaluator } from './create-evaluator.ts';
import { alarmRuleModules } from './rules/registry.ts';
import type { StopPort } from './stop-port.ts';

export interface Alarms extends AlarmActions, Evaluator {
  rules: AlarmRuleService;
  list(scope: AlarmScope, state: AlarmState | undefined, page: PageRequest): Promise<ListedAlarm[]>;
  get(alarmId: string): ReturnType<typeof getAlarm>;
}

/** Alarms evaluated from rows, what people do to them, and the rules that they go by. */
export function createAlarms(core: Core, port: StopPort): Alarms {
  return {
    ...createEvaluator(core, port, alarmRuleModules),
    ...createAlarmActions(core),
    rules: createAlarmRuleService(core, alarmRuleModules),
    list: (scope, state, page) => listAlarms(core.reader, scope, state, page),
    get: (alarmId) => getAlarm(core.reader, alarmId),
  };
}
