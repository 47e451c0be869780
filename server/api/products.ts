import type { Products } from '../products/create-products.ts';
import { pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

export function productHandlers(products: Products) {
  return handlers({
    listProducts: async ({ site, query }) => pageOfWhole(await products.list(site.id), query),
    createProduct: async ({ site, person, body, repeated }) => {
      const made = await products.create({ siteId: site.id, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
  });
}
