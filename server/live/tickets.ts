import { randomBytes } from 'node:crypto';
import type { Person } from '../access/person.ts';
import type { Clock } from '../clock.ts';
import { TooManyError } from '../errors.ts';

export const TICKET_SECONDS = 30;
const MOST_TICKETS = 10_000;

export interface TicketHolder extends Person {
  systemIds: string[];
}

export interface Tickets {
  issue(holder: TicketHolder): string;
  /** Good once: null the second time, and after it expired. */
  redeem(ticket: string): TicketHolder | null;
}

/** A WebSocket cannot send an `Authorization` header, and a token in a URL ends up in logs: hence tickets. */
export function createTickets(clock: Clock): Tickets {
  const issued = new Map<string, { holder: TicketHolder; untilMs: number }>();

  function dropExpired(): void {
    // In the order of issue, which is that of expiry.
    for (const [ticket, { untilMs }] of issued) {
      if (untilMs > clock.nowMs()) return;
      issued.delete(ticket);
    }
  }

  return {
    issue(holder) {
      dropExpired();
      if (issued.size >= MOST_TICKETS)
        throw new TooManyError('Too many live streams are being opened: try again in a minute', TICKET_SECONDS);
      const ticket = randomBytes(32).toString('base64url');
      issued.set(ticket, { holder, untilMs: clock.nowMs() + TICKET_SECONDS * 1000 });
      return ticket;
    },
    redeem(ticket) {
      const found = issued.get(ticket);
      issued.delete(ticket);
      return found !== undefined && found.untilMs > clock.nowMs() ? found.holder : null;
    },
  };
}
