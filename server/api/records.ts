import type { Core } from '../core.ts';
import { createEvents, eventOf } from '../records/create-events.ts';
import { createHandDoses, handDoseOf } from '../records/create-hand-doses.ts';
import { createTests } from '../records/create-tests.ts';
import { importTests } from '../records/import-tests.ts';
import { testOf } from '../records/test-rows.ts';
import { pageFrom, pageRequest } from './page.ts';
import { receiveFile } from './receive-file.ts';
import { handlers } from './route.ts';

const MAX_IMPORT_BYTES = 2 * 2 ** 20;

const positionOf = (row: { atMs: number; id: string }) => ({ key: row.atMs, id: row.id });

/** What people write down: tests, doses by hand, events. */
export function recordHandlers(core: Core) {
  const tests = createTests(core);
  const handDoses = createHandDoses(core);
  const events = createEvents(core);

  return handlers({
    listTests: async ({ params, query }) => {
      const filter = { fromMs: query.from, toMs: query.to, quantity: query.quantity };
      return pageFrom(await tests.page(params.systemId, filter, pageRequest(query)), query, positionOf, testOf);
    },
    createTest: async ({ site, person, params, body, repeated }) => {
      const member = { siteId: site.id, role: site.role, userId: person.userId };
      const made = await tests.create({ ...member, systemId: params.systemId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
    updateTest: ({ site, person, params, body }) =>
      tests.update({ siteId: site.id, role: site.role, userId: person.userId, testId: params.testId, body }),
    deleteTest: async ({ site, person, params }) => {
      await tests.remove({ siteId: site.id, role: site.role, userId: person.userId, testId: params.testId });
      return {};
    },
    importTests: async ({ site, person, params, query, request, response }) => {
      const file = await receiveFile(request, response, 'file', MAX_IMPORT_BYTES);
      const isDryRun = query.dryRun === '1';
      return importTests(core, { siteId: site.id, systemId: params.systemId, userId: person.userId, file, isDryRun });
    },
    listHandDoses: async ({ params, query }) => {
      const filter = { fromMs: query.from, toMs: query.to };
      return pageFrom(await handDoses.page(params.systemId, filter, pageRequest(query)), query, positionOf, handDoseOf);
    },
    createHandDose: async ({ site, person, params, body, repeated }) => {
      const made = await handDoses.create({ siteId: site.id, systemId: params.systemId, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
    listEvents: async ({ params, query }) => {
      const filter = { fromMs: query.from, toMs: query.to };
      return pageFrom(await events.page(params.systemId, filter, pageRequest(query)), query, positionOf, eventOf);
    },
    createEvent: async ({ site, person, params, body, repeated }) => {
      const made = await events.create({ siteId: site.id, systemId: params.systemId, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
  });
}
