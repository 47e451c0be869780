import type { Head } from '#shared/contract/rig.ts';
import type { Person } from '../access/person.ts';
import type { Actor } from '../audit/record-audit.ts';
import type { Orders } from '../orders/create-orders.ts';
import type { Schedules } from '../schedules/create-schedules.ts';
import type { Stops } from '../stops/create-stops.ts';
import { pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

export interface ControlServices {
  schedules: Schedules;
  stops: Stops;
  orders: Orders;
  /** The heads in use on a system, in their REST shape. */
  listHeads(systemId: string): Promise<Head[]>;
}

const actorOf = (person: Person): Actor => ({ kind: 'user', id: person.userId });

export function controlHandlers({ schedules, stops, orders, listHeads }: ControlServices) {
  return handlers({
    async putSchedule({ params, body, person, site }) {
      await schedules.put(params.systemId, body, actorOf(person), site.role);
      return { heads: await listHeads(params.systemId) };
    },
    stop: ({ params, body, person }) => stops.stop(params.systemId, body.heads, actorOf(person)),
    resume: ({ params, body, person }) => stops.resume(params.systemId, body.heads, actorOf(person)),
    listOrders: async ({ params, query }) => pageOfWhole(await orders.list(params.systemId), query),
  });
}
