import { sql } from 'kysely';
import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { Points, Series, telemetryEndpoints } from '#shared/contract/telemetry.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { recordChange } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { PageRequest } from '../db/seek.ts';
import { NotFoundError } from '../errors.ts';
import { createPointsThread } from './points-thread.ts';
import { presentSeries } from './present-series.ts';

type SeriesPatch = BodyOf<typeof telemetryEndpoints.updateSeries>;

export interface Telemetry {
  listSeries(systemId: string): Promise<Series[]>;
  updateSeries(input: { siteId: string; seriesId: string; userId: string; patch: SeriesPatch }): Promise<Series>;
  points(input: { seriesId: string; fromMs: number; toMs: number; points: number }): Promise<Points>;
  /** Runs that began in [`fromMs`, `toMs`), newest first. */
  listRuns(input: { systemId: string; fromMs?: number; toMs?: number; page: PageRequest }): Promise<Row<'run'>[]>;
  /** Refused messages of a device, newest first. */
  listRejects(deviceId: string, page: PageRequest): Promise<Row<'reject'>[]>;
  close(): Promise<void>;
}

/** Two pumps may give two runs the same id and the same beginning. */
const runPosition = sql<string>`run.run || '/' || run.deviceId`;

/** The place of a run in a list, as `PageRequest` has it. */
export const positionOfRun = (row: Row<'run'>) => ({ key: row.begunMs, id: `${row.run}/${row.deviceId}` });

const noSeries = () => new NotFoundError('There is no such series in your sites');

export function createTelemetry(core: Core): Telemetry {
  const { reader, writer, clock } = core;
  const thread = createPointsThread(core.databaseFile);

  return {
    async listSeries(systemId) {
      const rows = await reader.selectFrom('series').selectAll().where('systemId', '=', systemId).orderBy('key', 'desc').execute();
      return rows.map(presentSeries);
    },

    async updateSeries({ siteId, seriesId, userId, patch }) {
      const row = await writer.commit((tx) => {
        const before = tx.first(query.selectFrom('series').selectAll().where('id', '=', seriesId).where('siteId', '=', siteId));
        if (before === undefined) throw noSeries();
        const { name = before.name, quantity = before.quantity } = patch;
        if (name === before.name && quantity === before.quantity) return before;
        tx.run(query.updateTable('series').set({ name, quantity }).where('id', '=', seriesId));
        const nowMs = clock.nowMs();
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'update',
          entity: 'series',
          entityId: seriesId,
          before: { name: before.name, quantity: before.quantity },
          after: { name, quantity },
        });
        recordChange(tx, { systemId: before.systemId, type: 'plan', atMs: nowMs, data: { reason: 'series' } });
        return { ...before, name, quantity };
      });
      return presentSeries(row);
    },

    async points({ seriesId, fromMs, toMs, points }) {
      const series = await reader.selectFrom('series').select('key').where('id', '=', seriesId).executeTakeFirst();
      if (series === undefined) throw noSeries();
      return thread.read({ seriesKey: series.key, fromMs, toMs, points, nowMs: clock.nowMs() });
    },

    async listRuns({ systemId, fromMs, toMs, page }) {
      let runs = reader.selectFrom('run').selectAll().where('systemId', '=', systemId);
      if (fromMs !== undefined) runs = runs.where('begunMs', '>=', fromMs);
      if (toMs !== undefined) runs = runs.where('begunMs', '<', toMs);
      if (page.after !== null) runs = runs.where(sql<boolean>`(run.begunMs, ${runPosition}) < (${page.after.key}, ${page.after.id})`);
      return runs.orderBy('begunMs', 'desc').orderBy(runPosition, 'desc').limit(page.limit).execute();
    },

    async listRejects(deviceId, page) {
      let rejects = reader.selectFrom('reject').selectAll().where('deviceId', '=', deviceId);
      if (page.after !== null) rejects = rejects.where('seq', '<', page.after.key);
      return rejects.orderBy('seq', 'desc').limit(page.limit).execute();
    },

    close: thread.close,
  };
}
