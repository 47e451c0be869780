import type { z } from 'zod';
import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { refillSchema, Reservoir, rigEndpoints } from '#shared/contract/rig.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { BadInputError, NotFoundError } from '../errors.ts';
import { productRevisionAt } from '../products/product-rows.ts';
import { checkRecordTime } from '../records/check-record-time.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { systemOfSite } from '../systems/system-rows.ts';
import { reservoirOf, reservoirRows } from './reservoir-rows.ts';

type CreateBody = BodyOf<typeof rigEndpoints.createReservoir>;
type RefillBody = BodyOf<typeof rigEndpoints.createRefill>;
type Refill = z.infer<typeof refillSchema>;

export interface Reservoirs {
  list(systemId: string): Promise<Reservoir[]>;
  create(input: { siteId: string; systemId: string; userId: string; body: CreateBody }): Promise<Made<Reservoir>>;
  refill(input: { siteId: string; reservoirId: string; userId: string; body: RefillBody }): Promise<Made<Refill>>;
}

export function createReservoirs(core: Core): Reservoirs {
  return {
    async list(systemId) {
      const reservoirs = reservoirRows(systemId);
      const rows = await readRows(core.reader, reservoirs.orderBy('reservoir.createdAtMs', 'desc').orderBy('reservoir.id', 'desc'));
      return rows.map((row) => reservoirOf(row, core.clock.nowMs()));
    },

    async create({ siteId, systemId, userId, body }) {
      const { id: givenId, ...fields } = body;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        if (tx.first(systemOfSite(siteId, systemId)) === undefined) throw new NotFoundError('There is no such system in your sites');
        const { id, isRepeated } = claimId(tx, { siteId, kind: `reservoir:${systemId}`, id: givenId, body: fields, nowMs });
        if (!isRepeated) {
          const series = query.selectFrom('series').where('systemId', '=', systemId).select('id');
          if (fields.levelSeriesId !== null && tx.first(series.where('id', '=', fields.levelSeriesId)) === undefined) {
            throw new BadInputError([{ path: 'levelSeriesId', message: 'This system has no such series' }]);
          }
          tx.run(query.insertInto('reservoir').values({ id, siteId, systemId, ...fields, createdAtMs: nowMs }));
          recordAudit(tx, {
            atMs: nowMs,
            siteId,
            actor: { kind: 'user', id: userId },
            action: 'create',
            entity: 'reservoir',
            entityId: id,
            after: { systemId, ...fields },
          });
          recordChange(tx, { systemId, type: 'plan', atMs: nowMs, data: { reason: 'reservoir' } });
        }
        const row = tx.first(reservoirRows(systemId).where('reservoir.id', '=', id));
        if (row === undefined) throw new Error(`Reservoir ${id} was claimed and is not there`);
        return { value: reservoirOf(row, nowMs), isRepeated };
      });
    },

    async refill({ siteId, reservoirId, userId, body }) {
      const { id: givenId, ...fields } = body;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const { id, isRepeated } = claimId(tx, { siteId, kind: `refill:${reservoirId}`, id: givenId, body: fields, nowMs });
        const refill: Refill = { id, reservoirId, ...fields, at: isoOf(Date.parse(fields.at)) };
        if (isRepeated) return { value: refill, isRepeated };
        const reservoir = tx.first(
          query.selectFrom('reservoir').where('siteId', '=', siteId).where('id', '=', reservoirId).select(['systemId', 'capacityMl']),
        );
        if (reservoir === undefined) throw new NotFoundError('There is no such reservoir in your sites');
        if (fields.ml > reservoir.capacityMl) {
          throw new BadInputError([{ path: 'ml', message: `The reservoir holds ${reservoir.capacityMl} mL at most` }]);
        }
        const atMs = checkRecordTime(fields.at, nowMs);
        const revision = productRevisionAt(tx, { siteId, productId: fields.productId, atMs });
        tx.run(
          query.insertInto('refill').values({
            id,
            siteId,
            reservoirId,
            productRevisionId: revision.id,
            atMs,
            ml: fields.ml,
            lot: fields.lot,
            actorId: userId,
            createdAtMs: nowMs,
          }),
        );
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'create',
          entity: 'refill',
          entityId: id,
          after: { reservoirId, ...fields },
        });
        recordChange(tx, { systemId: reservoir.systemId, type: 'plan', atMs: nowMs, data: { reason: 'refill' } });
        markDirty(tx, reservoir.systemId, nowMs);
        return { value: refill, isRepeated };
      });
    },
  };
}
