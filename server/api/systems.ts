import type { Systems } from '../systems/create-systems.ts';
import { pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

export function systemHandlers(systems: Systems) {
  return handlers({
    listSystems: async ({ person, query }) => pageOfWhole(await systems.listOf(person.userId), query),
    getSystem: ({ person, params }) => systems.get(person.userId, params.systemId),
    createSystem: async ({ site, person, body, repeated }) => {
      const made = await systems.create({ siteId: site.id, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
    updateSystem: ({ site, person, params, body }) =>
      systems.update({ siteId: site.id, systemId: params.systemId, userId: person.userId, body }),
  });
}
