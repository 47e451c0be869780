import type { Heads } from '../rig/create-heads.ts';
import type { Reservoirs } from '../rig/create-reservoirs.ts';
import { pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

export function rigHandlers(heads: Heads, reservoirs: Reservoirs) {
  return handlers({
    listHeads: async ({ params, query }) => pageOfWhole(await heads.list(params.systemId), query),
    createHead: async ({ site, person, params, body, repeated }) => {
      const made = await heads.create({ siteId: site.id, systemId: params.systemId, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
    updateHead: ({ site, person, params, body }) => heads.update({ siteId: site.id, headId: params.headId, userId: person.userId, body }),
    listReservoirs: async ({ params, query }) => pageOfWhole(await reservoirs.list(params.systemId), query),
    createReservoir: async ({ site, person, params, body, repeated }) => {
      const made = await reservoirs.create({ siteId: site.id, systemId: params.systemId, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
    createRefill: async ({ site, person, params, body, repeated }) => {
      const made = await reservoirs.refill({ siteId: site.id, reservoirId: params.reservoirId, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
  });
}
