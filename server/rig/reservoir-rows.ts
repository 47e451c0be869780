import type { Reservoir } from '#shared/contract/rig.ts';
import { emptyAtMs } from '#shared/domain/reservoir-forecast.ts';
import { isoOf, isoOrNull } from '#shared/time/iso-of.ts';
import { query } from '../db/open.ts';

/** The newest refill of each reservoir. */
const lastRefills = query
  .selectFrom((from) =>
    from
      .selectFrom('refill')
      .innerJoin('productRevision', 'productRevision.id', 'refill.productRevisionId')
      .select((select) => [
        'refill.reservoirId',
        'refill.atMs',
        'refill.ml',
        'productRevision.productId',
        select.fn
          .agg<number>('row_number')
          .over((over) => over.partitionBy('refill.reservoirId').orderBy('refill.atMs', 'desc').orderBy('refill.id', 'desc'))
          .as('place'),
      ])
      .as('ranked'),
  )
  .where('place', '=', 1)
  .select(['ranked.reservoirId', 'ranked.atMs', 'ranked.ml', 'ranked.productId']);

/** What the heads of each reservoir of a system gave since its last refill, while they drew from it. */
const drawnIn = (systemId: string) =>
  query
    .selectFrom(lastRefills.as('since'))
    .innerJoin('headAssignment as use', 'use.reservoirId', 'since.reservoirId')
    .innerJoin('doseLedger as ledger', (join) =>
      join
        .onRef('ledger.systemId', '=', 'use.systemId')
        .onRef('ledger.headId', '=', 'use.headId')
        .onRef('ledger.atMs', '>=', 'since.atMs')
        .onRef('ledger.atMs', '>=', 'use.fromMs')
        .on((on) => on.or([on('use.toMs', 'is', null), on('ledger.atMs', '<', on.ref('use.toMs'))])),
    )
    .where('use.systemId', '=', systemId)
    .groupBy('since.reservoirId')
    .select((select) => ['since.reservoirId', select.fn.sum<number>('ledger.deltaMl').as('ml')]);

/** The daily dose set for the heads that draw from each reservoir now. */
const planned = query
  .selectFrom('headAssignment as use')
  .innerJoin('headSchedule as schedule', 'schedule.headId', 'use.headId')
  .where('use.toMs', 'is', null)
  .where('schedule.toMs', 'is', null)
  .groupBy('use.reservoirId')
  .select((select) => ['use.reservoirId', select.fn.sum<number>('schedule.mlPerDay').as('mlPerDay')]);

export function reservoirRows(systemId: string) {
  return query
    .selectFrom('reservoir')
    .leftJoin(lastRefills.as('last'), 'last.reservoirId', 'reservoir.id')
    .leftJoin(drawnIn(systemId).as('drawn'), 'drawn.reservoirId', 'reservoir.id')
    .leftJoin(planned.as('planned'), 'planned.reservoirId', 'reservoir.id')
    .where('reservoir.systemId', '=', systemId)
    .select([
      'reservoir.id',
      'reservoir.siteId',
      'reservoir.systemId',
      'reservoir.name',
      'reservoir.capacityMl',
      'reservoir.levelSeriesId',
      'reservoir.createdAtMs',
      'last.atMs as refilledMs',
      'last.ml as refilledMl',
      'last.productId',
      'drawn.ml as drawnMl',
      'planned.mlPerDay',
    ]);
}

type ReservoirRow = ReturnType<typeof reservoirRows> extends { execute(): Promise<(infer Found)[]> } ? Found : never;

export function reservoirOf(row: ReservoirRow, nowMs: number): Reservoir {
  const { refilledMs, refilledMl, productId } = row;
  const place = { id: row.id, systemId: row.systemId, name: row.name, capacityMl: row.capacityMl, levelSeriesId: row.levelSeriesId };
  if (refilledMs === null || refilledMl === null || productId === null) {
    return { ...place, lastRefill: null, remainingMl: null, lastsUntil: null };
  }
  // By the books it can be less than empty, when a pump gives less than it reports.
  const remainingMl = Math.max(0, refilledMl - (row.drawnMl ?? 0));
  return {
    ...place,
    lastRefill: { at: isoOf(refilledMs), ml: refilledMl, productId },
    remainingMl,
    lastsUntil: isoOrNull(emptyAtMs({ remainingMl, mlPerDay: row.mlPerDay ?? 0, nowMs })),
  };
}
