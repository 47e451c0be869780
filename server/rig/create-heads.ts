import { uuidv7 } from 'uuidv7';
import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { Head, rigEndpoints } from '#shared/contract/rig.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, NotFoundError, RuleError } from '../errors.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import type { Schedules } from '../schedules/create-schedules.ts';
import { stopIfLatched } from '../stops/stop-if-latched.ts';
import { checkSchedule } from './check-schedule.ts';
import { checkUse, type HeadUse } from './head-use.ts';
import { headOf, headRows } from './head-rows.ts';

type CreateBody = BodyOf<typeof rigEndpoints.createHead>;
type UpdateBody = BodyOf<typeof rigEndpoints.updateHead>;

export interface Heads {
  list(systemId: string): Promise<Head[]>;
  create(input: { siteId: string; systemId: string; userId: string; body: CreateBody }): Promise<Made<Head>>;
  /** Closes the assignment in force and opens another: earlier runs keep what was in force when they began. */
  update(input: { siteId: string; headId: string; userId: string; body: UpdateBody }): Promise<Head>;
}

/** `schedules` brings a pump's schedule in line, in the same unit: the delivery rate of its heads stands in it. */
export function createHeads(core: Core, schedules: Pick<Schedules, 'revise'>): Heads {
  async function get(headId: string): Promise<Head> {
    const [row] = await readRows(core.reader, headRows().where('head.id', '=', headId));
    if (row === undefined) throw new NotFoundError('There is no such head in your sites');
    return headOf(row);
  }

  function assign(
    tx: Transaction,
    at: { siteId: string; systemId: string; headId: string; userId: string; fromMs: number },
    use: HeadUse,
  ): void {
    tx.run(
      query.insertInto('headAssignment').values({
        id: uuidv7(),
        siteId: at.siteId,
        headId: at.headId,
        systemId: at.systemId,
        ...use,
        fromMs: at.fromMs,
        toMs: null,
        actorId: at.userId,
      }),
    );
    recordChange(tx, { systemId: at.systemId, type: 'plan', atMs: at.fromMs, data: { reason: 'head' } });
    // Which heads give carbon, and of what strength, decides what counts in the limits.
    markDirty(tx, at.systemId, at.fromMs);
    if (use.kind === 'carbon') stopIfLatched(tx, { siteId: at.siteId, systemId: at.systemId, nowMs: at.fromMs });
  }

  return {
    async list(systemId) {
      const heads = headRows().where('assignment.systemId', '=', systemId);
      const rows = await readRows(core.reader, heads.orderBy('head.createdAtMs', 'desc').orderBy('head.id', 'desc'));
      return rows.map(headOf);
    },

    async create({ siteId, systemId, userId, body }) {
      const { id: givenId, deviceId, head, ...use } = body;
      const { id, isRepeated } = await core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const claim = claimId(tx, { siteId, kind: `head:${systemId}`, id: givenId, body: { deviceId, head, ...use }, nowMs });
        if (claim.isRepeated) return claim;
        const pump = tx.first(
          query
            .selectFrom('device')
            .where('id', '=', deviceId)
            .where('siteId', '=', siteId)
            .where('systemId', '=', systemId)
            .where('kind', '=', 'pump')
            .select('id'),
        );
        if (pump === undefined) throw new BadInputError([{ path: 'deviceId', message: 'This system has no such pump' }]);
        if (tx.first(query.selectFrom('head').where('deviceId', '=', deviceId).where('head', '=', head).select('id')) !== undefined) {
          throw new RuleError('head-in-use', `Head ${head} of this pump is in use already; change what it is used for instead`);
        }
        checkUse(tx, { siteId, systemId }, use);
        tx.run(query.insertInto('head').values({ id: claim.id, siteId, deviceId, head, createdAtMs: nowMs }));
        assign(tx, { siteId, systemId, headId: claim.id, userId, fromMs: nowMs }, use);
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'create',
          entity: 'head',
          entityId: claim.id,
          after: { systemId, deviceId, head, ...use },
        });
        return claim;
      });
      return { value: await get(id), isRepeated };
    },

    async update({ siteId, headId, userId, body }) {
      await core.writer.commit((tx) => {
        const row = tx.first(headRows().where('head.id', '=', headId).where('head.siteId', '=', siteId));
        if (row === undefined) throw new NotFoundError('There is no such head in your sites');
        const before: HeadUse = {
          kind: row.kind,
          productId: row.productId,
          reservoirId: row.reservoirId,
          mlPerSecond: row.mlPerSecond,
          smallestMl: row.smallestMl,
        };
        const after: HeadUse = { ...before, ...body };
        if (JSON.stringify(after) === JSON.stringify(before)) return;
        checkUse(tx, { siteId, systemId: row.systemId }, after);
        checkSchedule(before, after, { mlPerDay: row.mlPerDay ?? 0, slotMl: row.slotMl ?? 0 });
        // Should the clock have been set back, the assignments still follow each other.
        const nowMs = Math.max(core.clock.nowMs(), row.assignedMs);
        tx.run(query.updateTable('headAssignment').set({ toMs: nowMs }).where('id', '=', row.assignmentId));
        assign(tx, { siteId, systemId: row.systemId, headId, userId, fromMs: nowMs }, after);
        schedules.revise(tx, { deviceId: row.deviceId, cause: 'head', actor: { kind: 'user', id: userId }, nowMs });
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'update',
          entity: 'head',
          entityId: headId,
          before,
          after,
        });
      });
      return get(headId);
    },
  };
}
