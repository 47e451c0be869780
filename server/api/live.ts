import type { Live } from '../live/create-live.ts';
import { handlers } from './route.ts';

export function liveHandlers(live: Live) {
  return handlers({
    createLiveTicket: ({ person, body }) => live.createTicket(person, body.systemIds),
  });
}
