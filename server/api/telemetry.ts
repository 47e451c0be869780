import { presentRun } from '../telemetry/present-run.ts';
import { positionOfRun, type Telemetry } from '../telemetry/create-telemetry.ts';
import { pageFrom, pageRequest, pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

/** The drop tape and the doses by bucket are in `doses.ts`. */
export function telemetryHandlers(telemetry: Telemetry) {
  return handlers({
    listSeries: async ({ params, query }) => pageOfWhole(await telemetry.listSeries(params.systemId), query),
    updateSeries: ({ params, site, person, body }) =>
      telemetry.updateSeries({ siteId: site.id, seriesId: params.seriesId, userId: person.userId, patch: body }),
    getPoints: ({ params, query }) =>
      telemetry.points({ seriesId: params.seriesId, fromMs: query.from, toMs: query.to, points: query.points }),
    listRuns: async ({ params, query }) => {
      const rows = await telemetry.listRuns({
        systemId: params.systemId,
        ...(query.from === undefined ? {} : { fromMs: query.from }),
        ...(query.to === undefined ? {} : { toMs: query.to }),
        page: pageRequest(query),
      });
      return pageFrom(rows, query, positionOfRun, presentRun);
    },
  });
}
