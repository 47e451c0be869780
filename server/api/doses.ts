import type { Doses } from '../doses/create-doses.ts';
import { handlers } from './route.ts';

export function doseHandlers(doses: Doses) {
  return handlers({
    getTape: ({ params, query }) => doses.tape(params.systemId, query.from, query.to),
    getDoses: ({ params, query }) => doses.doses(params.systemId, query.from, query.to, query.points),
  });
}
