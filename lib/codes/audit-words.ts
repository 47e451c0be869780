import { z } from 'zod';
import type { AuditEntry } from '#shared/contract/sites.ts';
import { alarmCodes } from '#shared/domain/alarm-codes.ts';
import { formatMl } from '../format/millilitres.ts';
import { alarmTitles } from './alarm-words.ts';

type Details = Record<string, unknown>;

const detailsSchema = z.record(z.string(), z.unknown()).catch({});
const alarmCodeSchema = z.enum(alarmCodes);

/** A name in quotes, when one was written down. */
const named = (what: string, { name }: Details) => (typeof name === 'string' ? `${what} "${name}"` : what);
const ml = (value: unknown) => (typeof value === 'number' ? formatMl(value) : null);

function test({ quantity, below, value, unit }: Details): string {
  if (typeof quantity !== 'string' || typeof value !== 'number' || typeof unit !== 'string') return 'a test';
  return `${quantity} ${below === true ? 'under ' : ''}${value} ${unit}`;
}

function alarm(code: unknown): string {
  const known = alarmCodeSchema.safeParse(code);
  return known.success ? `"${alarmTitles[known.data]}"` : 'an alarm';
}

function numbered({ head }: Details): string {
  return typeof head === 'number' ? `head ${head}` : 'a head';
}

function schedule({ mlPerDay }: Details, before: Details): string {
  const [now, then] = [ml(mlPerDay), ml(before['mlPerDay'])];
  if (now === null) return 'scheduled a head';
  return `scheduled ${now} a day for a head${then === null || then === now ? '' : `, ${then} before`}`;
}

function rule(entityId: string): string {
  return `changed the limit ${alarm(entityId.split('/')[1])}`;
}

/** What was done, by entity and action; `after` and `before` as the server wrote them down. */
const deeds: Record<string, (after: Details, before: Details, entityId: string) => string> = {
  'site create': (after) => `made ${named('the site', after)}`,
  'invite create': ({ email, role }) => `invited ${String(email)} as ${String(role)}`,
  'invite accept': ({ role }) => `joined as ${String(role)}`,
  'membership update': ({ role }, before) => `changed a member from ${String(before['role'])} to ${String(role)}`,
  'membership delete': (_, { role }) => `took a member out (${String(role)})`,
  'system create': (after) => `added ${named('the system', after)}`,
  'system update': (after) => `changed ${named('the system', after)}`,
  'device create': (after) => `connected ${named('the device', after)}`,
  'device renew-credentials': () => 'made a new password for a device',
  'head create': (after) => `put ${numbered(after)} to use`,
  'head update': () => 'changed what a head is used for',
  'head schedule': schedule,
  'head stop': (after) => `stopped ${numbered(after)}${after['cause'] === 'interlock' ? ', by an alarm' : ''}`,
  'head resume': (after) => `resumed ${numbered(after)}`,
  'reservoir create': (after) => `added ${named('the bottle', after)}`,
  'refill create': (after) => `refilled a bottle${ml(after['ml']) === null ? '' : ` to ${ml(after['ml'])}`}`,
  'product create': (after) => `added ${named('the product', after)}`,
  'series update': (after) => `changed ${named('the series', after)}`,
  'alarmRule update': (_, __, entityId) => rule(entityId),
  'test create': (after) => `wrote down ${test(after)}`,
  'test update': (after, before) => `corrected ${test(before)} to ${test(after)}`,
  'test delete': (_, before) => `deleted ${test(before)}`,
  'test restore': (after) => `brought back ${test(after)}`,
  'test import': ({ added }) => `imported ${String(added)} tests`,
  'event create': ({ kind }) => `wrote down an event: ${String(kind).replaceAll('-', ' ')}`,
  'hand-dose create': (after) => `wrote down a dose by hand${ml(after['ml']) === null ? '' : ` of ${ml(after['ml'])}`}`,
  'alarm take': ({ code }) => `is on the alarm ${alarm(code)}`,
  'alarm occur': ({ code }) => `raised the alarm ${alarm(code)}`,
  'alarm re-alarm': ({ code }) => `raised the alarm ${alarm(code)} again`,
  'alarm return': ({ code }) => `saw the end of ${alarm(code)}`,
  'alarm record': ({ code }) => `recorded the alarm ${alarm(code)} late`,
  'alarm acknowledge': ({ code }) => `acknowledged ${alarm(code)}`,
  'alarm reset': ({ code }) => `reset ${alarm(code)}`,
  'alarm shelve': ({ code }) => `made ${alarm(code)} quiet`,
  'alarm unshelve': ({ code }) => `ended the quiet of ${alarm(code)}`,
};

function actor({ actorKind, actorName }: AuditEntry): string {
  if (actorKind === 'system') return 'Steadfall';
  return actorName ?? (actorKind === 'device' ? 'A device' : 'Somebody who is gone');
}

/** Who did what, as a sentence; an action that is not known here is shown by its code. */
export function auditSentence(entry: AuditEntry): string {
  const [after, before] = [detailsSchema.parse(entry.after), detailsSchema.parse(entry.before)];
  const deed = deeds[`${entry.entity} ${entry.action}`];
  const said = deed === undefined ? `${entry.action}: ${entry.entity}` : deed(after, before, entry.entityId);
  const reason = after['reason'] ?? after['overrideReason'];
  return `${actor(entry)} ${said}${typeof reason === 'string' && reason !== '' ? `: ${reason}` : ''}.`;
}
