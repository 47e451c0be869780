import { alarmCodeSchema } from '#shared/contract/alarms.ts';
import type { ListedAlarm } from '../alarms/alarm-lists.ts';
import type { Alarms } from '../alarms/create-alarms.ts';
import { presentAlarm } from '../alarms/present-alarm.ts';
import type { Position } from '../db/seek.ts';
import { NotFoundError } from '../errors.ts';
import { pageFrom, pageRequest, pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

const positionOf = (row: ListedAlarm): Position => ({ key: row.raisedAtMs, id: row.id });
const itemOf = (row: ListedAlarm) => presentAlarm(row, row.takenByName);

function codeOf(text: string) {
  const parsed = alarmCodeSchema.safeParse(text);
  if (!parsed.success) throw new NotFoundError('There is no alarm of this code');
  return parsed.data;
}

export function alarmHandlers(alarms: Alarms) {
  return handlers<'listAlarms' | 'listSystemAlarms' | 'getAlarm' | 'acknowledge' | 'take' | 'shelve' | 'reset' | 'listRules' | 'putRule'>({
    async listAlarms({ query, person }) {
      const rows = await alarms.list({ userId: person.userId }, query.state, pageRequest(query));
      return pageFrom(rows, query, positionOf, itemOf);
    },
    async listSystemAlarms({ params, query }) {
      const rows = await alarms.list({ systemId: params.systemId }, query.state, pageRequest(query));
      return pageFrom(rows, query, positionOf, itemOf);
    },
    getAlarm: ({ params }) => alarms.get(params.alarmId),
    acknowledge: ({ params, person }) => alarms.acknowledge(params.alarmId, person.userId),
    take: ({ params, person, body }) => alarms.take(params.alarmId, person.userId, Date.parse(body.arriveAt)),
    shelve: ({ params, person, body }) => alarms.shelve(params.alarmId, person.userId, Date.parse(body.until), body.reason),
    reset: ({ params, person, body }) => alarms.reset(params.alarmId, person.userId, body.cause),
    async listRules({ params, query }) {
      return pageOfWhole(await alarms.rules.list(params.systemId), query);
    },
    putRule: ({ params, person, site, body }) =>
      alarms.rules.put(params.systemId, codeOf(params.code), body, { userId: person.userId, role: site.role }),
  });
}
