import type { Products } from '../products/create-products.ts';
import { wholePage } from './page.ts';
import { handlers } from './route.ts';

export function productHandlers(products: Products) {
  return handlers({
    listProducts: async ({ site }) => wholePage(await products.list(site.id)),
    createProduct: async ({ site, person, body, repeated }) => {
      const made = await products.create({ siteId: site.id, userId: person.userId, body });
      if (made.isRepeated) repeated();
      return made.value;
    },
  });
}
