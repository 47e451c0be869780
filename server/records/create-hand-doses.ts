import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { HandDose, recordEndpoints } from '#shared/contract/records.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { comesAfter, type PageRequest } from '../db/seek.ts';
import { NotFoundError } from '../errors.ts';
import { productRevisionAt } from '../products/product-rows.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { systemOfSite } from '../systems/system-rows.ts';
import { checkRecordTime } from './check-record-time.ts';
import { writtenBy } from './written-by.ts';

type CreateBody = BodyOf<typeof recordEndpoints.createHandDose>;

function handDoseRows() {
  return query
    .selectFrom('handDose')
    .leftJoin('user', 'user.id', 'handDose.actorId')
    .select(['handDose.id', 'handDose.systemId', 'handDose.productId', 'handDose.atMs', 'handDose.ml', writtenBy]);
}

export type HandDoseRow = ReturnType<typeof handDoseRows> extends { execute(): Promise<(infer Found)[]> } ? Found : never;

export function handDoseOf({ atMs, ...row }: HandDoseRow): HandDose {
  return { ...row, at: isoOf(atMs) };
}

export interface HandDoses {
  /** Rows, newest first, as many as the request asks for. */
  page(systemId: string, filter: { fromMs?: number; toMs?: number }, request: PageRequest): Promise<HandDoseRow[]>;
  /** Goes into the dose ledger at its own time, where every limit counts it. */
  create(input: { siteId: string; systemId: string; userId: string; body: CreateBody }): Promise<Made<HandDose>>;
}

export function createHandDoses(core: Core): HandDoses {
  return {
    page(systemId, filter, { limit, after }) {
      let rows = handDoseRows().where('handDose.systemId', '=', systemId);
      if (filter.fromMs !== undefined) rows = rows.where('handDose.atMs', '>=', filter.fromMs);
      if (filter.toMs !== undefined) rows = rows.where('handDose.atMs', '<', filter.toMs);
      if (after !== null) rows = rows.where(comesAfter('handDose.atMs', 'handDose.id', after));
      return readRows(core.reader, rows.orderBy('handDose.atMs', 'desc').orderBy('handDose.id', 'desc').limit(limit));
    },

    create({ siteId, systemId, userId, body }) {
      const { id: givenId, ...fields } = body;
      const { productId, ml } = fields;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        if (tx.first(systemOfSite(siteId, systemId)) === undefined) throw new NotFoundError('There is no such system in your sites');
        const { id, isRepeated } = claimId(tx, { siteId, kind: `hand-dose:${systemId}`, id: givenId, body: fields, nowMs });
        if (!isRepeated) {
          const atMs = checkRecordTime(fields.at, nowMs);
          const revision = productRevisionAt(tx, { siteId, productId, atMs });
          const productRevisionId = revision.id;
          tx.run(
            query
              .insertInto('handDose')
              .values({ id, siteId, systemId, productId, productRevisionId, atMs, ml, actorId: userId, createdAtMs: nowMs }),
          );
          tx.run(
            query.insertInto('doseLedger').values({
              siteId,
              systemId,
              sourceKind: 'hand',
              sourceId: id,
              step: 0,
              headId: null,
              kind: 'carbon',
              productRevisionId,
              atMs,
              deltaMl: ml,
              oxygenDemandMg: revision.oxygenDemandMgPerMl === null ? null : revision.oxygenDemandMgPerMl * ml,
              receivedMs: nowMs,
            }),
          );
          recordAudit(tx, {
            atMs: nowMs,
            siteId,
            actor: { kind: 'user', id: userId },
            action: 'create',
            entity: 'hand-dose',
            entityId: id,
            after: { systemId, ...fields },
          });
          recordChange(tx, { systemId, type: 'plan', atMs: nowMs, data: { reason: 'hand-dose' } });
          markDirty(tx, systemId, nowMs);
        }
        const row = tx.first(handDoseRows().where('handDose.id', '=', id));
        if (row === undefined) throw new Error(`Hand dose ${id} was claimed and is not there`);
        return { value: handDoseOf(row), isRepeated };
      });
    },
  };
}
