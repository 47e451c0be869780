import type { BodyOf } from '#shared/contract/endpoint.ts';
import { type Event, eventSchema, type recordEndpoints } from '#shared/contract/records.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { comesAfter, type PageRequest } from '../db/seek.ts';
import { NotFoundError } from '../errors.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { systemOfSite } from '../systems/system-rows.ts';
import { checkRecordTime } from './check-record-time.ts';
import { writtenBy } from './written-by.ts';

type CreateBody = BodyOf<typeof recordEndpoints.createEvent>;

function eventRows() {
  return query
    .selectFrom('event')
    .leftJoin('user', 'user.id', 'event.actorId')
    .select(['event.id', 'event.systemId', 'event.kind', 'event.atMs', 'event.litres', 'event.note', writtenBy]);
}

export type EventRow = ReturnType<typeof eventRows> extends { execute(): Promise<(infer Found)[]> } ? Found : never;

export function eventOf({ atMs, kind, ...row }: EventRow): Event {
  return { ...row, kind: eventSchema.shape.kind.parse(kind), at: isoOf(atMs) };
}

export interface Events {
  /** Rows, newest first, as many as the request asks for. */
  page(systemId: string, filter: { fromMs?: number; toMs?: number }, request: PageRequest): Promise<EventRow[]>;
  create(input: { siteId: string; systemId: string; userId: string; body: CreateBody }): Promise<Made<Event>>;
}

export function createEvents(core: Core): Events {
  return {
    page(systemId, filter, { limit, after }) {
      let rows = eventRows().where('event.systemId', '=', systemId);
      if (filter.fromMs !== undefined) rows = rows.where('event.atMs', '>=', filter.fromMs);
      if (filter.toMs !== undefined) rows = rows.where('event.atMs', '<', filter.toMs);
      if (after !== null) rows = rows.where(comesAfter('event.atMs', 'event.id', after));
      return readRows(core.reader, rows.orderBy('event.atMs', 'desc').orderBy('event.id', 'desc').limit(limit));
    },

    create({ siteId, systemId, userId, body }) {
      const { id: givenId, ...fields } = body;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        if (tx.first(systemOfSite(siteId, systemId)) === undefined) throw new NotFoundError('There is no such system in your sites');
        const { id, isRepeated } = claimId(tx, { siteId, kind: `event:${systemId}`, id: givenId, body: fields, nowMs });
        if (!isRepeated) {
          const { at, kind, litres, note } = fields;
          const atMs = checkRecordTime(at, nowMs);
          tx.run(query.insertInto('event').values({ id, siteId, systemId, kind, atMs, litres, note, actorId: userId, createdAtMs: nowMs }));
          recordAudit(tx, {
            atMs: nowMs,
            siteId,
            actor: { kind: 'user', id: userId },
            action: 'create',
            entity: 'event',
            entityId: id,
            after: { systemId, ...fields },
          });
        }
        const row = tx.first(eventRows().where('event.id', '=', id));
        if (row === undefined) throw new Error(`Event ${id} was claimed and is not there`);
        const event = eventOf(row);
        if (!isRepeated) recordChange(tx, { systemId, type: 'event', atMs: nowMs, data: event });
        return { value: event, isRepeated };
      });
    },
  };
}
