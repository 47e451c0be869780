import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { System, systemEndpoints } from '#shared/contract/systems.ts';
import { netVolumeLitres, type Volumes } from '#shared/domain/net-volume.ts';
import { systemRank, systemRanks } from '#shared/domain/system-rank.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { BadInputError, NotFoundError } from '../errors.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { readStatuses } from './read-statuses.ts';
import { systemOfSite, systemRows } from './system-rows.ts';

type CreateBody = BodyOf<typeof systemEndpoints.createSystem>;
type UpdateBody = BodyOf<typeof systemEndpoints.updateSystem>;

export interface Systems {
  /** The systems of all sites that a person is in, worst first, then by name. */
  listOf(userId: string): Promise<System[]>;
  get(userId: string, systemId: string): Promise<System>;
  create(input: { siteId: string; userId: string; body: CreateBody }): Promise<Made<System>>;
  update(input: { siteId: string; systemId: string; userId: string; body: UpdateBody }): Promise<System>;
}

/** @throws {BadInputError} when no water is left. */
function netLitresOf(volumes: Volumes): number {
  const netLitres = netVolumeLitres(volumes);
  if (netLitres !== null) return netLitres;
  const grossLitres = volumes.displayLitres + volumes.sumpLitres;
  throw new BadInputError([
    { path: 'displacementLitres', message: `The displacement must be under the gross volume, ${grossLitres} L: no water would be left` },
  ]);
}

export function createSystems(core: Core): Systems {
  async function read(userId: string, systemId: string | null): Promise<System[]> {
    const rows = await readRows(core.reader, systemId === null ? systemRows(userId) : systemRows(userId).where('system.id', '=', systemId));
    if (rows.length === 0) return [];
    const statuses = await readStatuses(core.reader, rows, core.clock.nowMs());
    return rows.flatMap((row) => {
      const status = statuses.get(row.id);
      return status === undefined ? [] : [{ ...row, netLitres: netLitresOf(row), status }];
    });
  }

  async function get(userId: string, systemId: string): Promise<System> {
    const [system] = await read(userId, systemId);
    if (system === undefined) throw new NotFoundError('There is no such system in your sites');
    return system;
  }

  return {
    get,

    async listOf(userId) {
      const systems = await read(userId, null);
      const nowMs = core.clock.nowMs();
      const badness = (system: System) => systemRanks.indexOf(systemRank(system.status, nowMs));
      return systems
        .map((system) => ({ system, rank: badness(system) }))
        .sort((one, other) => one.rank - other.rank || one.system.name.localeCompare(other.system.name))
        .map(({ system }) => system);
    },

    async create({ siteId, userId, body }) {
      const { id: givenId, ...fields } = body;
      netLitresOf(fields);
      const claimed = await core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const claim = claimId(tx, { siteId, kind: 'system', id: givenId, body: fields, nowMs });
        if (claim.isRepeated) return claim;
        tx.run(query.insertInto('system').values({ id: claim.id, siteId, ...fields, createdAtMs: nowMs }));
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'create',
          entity: 'system',
          entityId: claim.id,
          after: fields,
        });
        return claim;
      });
      return { value: await get(userId, claimed.id), isRepeated: claimed.isRepeated };
    },

    async update({ siteId, systemId, userId, body }) {
      await core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const before = tx.first(systemOfSite(siteId, systemId));
        if (before === undefined) throw new NotFoundError('There is no such system in your sites');
        const after = { ...before, ...body };
        netLitresOf(after);
        tx.run(
          query
            .updateTable('system')
            .set({
              name: after.name,
              displayLitres: after.displayLitres,
              sumpLitres: after.sumpLitres,
              displacementLitres: after.displacementLitres,
            })
            .where('id', '=', systemId),
        );
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'update',
          entity: 'system',
          entityId: systemId,
          before,
          after,
        });
        recordChange(tx, { systemId, type: 'plan', atMs: nowMs, data: { reason: 'system' } });
        // The ceilings of the volume limits are the label's dose for the net volume.
        markDirty(tx, systemId, nowMs);
      });
      return get(userId, systemId);
    },
  };
}
