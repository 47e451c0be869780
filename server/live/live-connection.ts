import type { WebSocket } from 'ws';
import { liveCloseCodes } from '#shared/contract/live.ts';
import type { ChangeLog, LoggedChange } from './change-log.ts';
import type { TicketHolder } from './tickets.ts';

/** More behind than this is refetched at once rather than replayed. */
const MOST_REPLAYED = 5_000;
/** The log is one for all systems: beyond this many rows looking for one's own costs more than refetching. */
const MOST_READ = 50_000;
/** A browser that was told to go has this long to say so. */
const CLOSING_MS = 3_000;

export interface LiveConnection {
  readonly holder: TicketHolder;
  /** The site of each system followed. */
  readonly sites: ReadonlyMap<string, string>;
  /** Sends what was missed since `since`, or a `gap` for each system when that cannot be told any more. */
  resume(log: ChangeLog, since: number): void;
  send(change: LoggedChange): void;
  /** Pings; a browser that did not answer the ping before is cut. */
  beat(): void;
  close(code: number, reason: string): void;
}

export function createLiveConnection(
  socket: WebSocket,
  holder: TicketHolder,
  sites: ReadonlyMap<string, string>,
  maxBufferedBytes: number,
): LiveConnection {
  let isAlive = true;
  let sentSeq = 0;
  socket.on('pong', () => (isAlive = true));

  function close(code: number, reason: string): void {
    socket.close(code, reason);
    setTimeout(() => socket.terminate(), CLOSING_MS).unref();
  }

  function write(frame: string): void {
    if (socket.readyState === socket.OPEN) socket.send(frame);
  }

  /** Null when too much was missed. */
  function missed(log: ChangeLog, since: number, newest: number): LoggedChange[] | null {
    const oldest = log.oldest();
    const isPruned = since < newest && (oldest === null || since < oldest - 1);
    if (since > newest || isPruned || newest - since > MOST_READ) return null;
    const own = log.ofSystemsAfter([...sites.keys()], since, MOST_REPLAYED + 1);
    const bytes = own.reduce((sum, change) => sum + change.frame.length, 0);
    if (own.length > MOST_REPLAYED || bytes > maxBufferedBytes) return null;
    return own;
  }

  return {
    holder,
    sites,
    resume(log, since) {
      const newest = log.newest();
      const changes = missed(log, since, newest);
      sentSeq = newest;
      if (changes === null) {
        for (const systemId of sites.keys()) write(JSON.stringify({ seq: newest, type: 'gap', systemId, data: {} }));
        return;
      }
      for (const change of changes) {
        sentSeq = Math.max(sentSeq, change.seq);
        write(change.frame);
      }
    },
    send(change) {
      if (change.seq <= sentSeq || !sites.has(change.systemId)) return;
      sentSeq = change.seq;
      if (socket.bufferedAmount > maxBufferedBytes) close(liveCloseCodes.tooSlow, 'too slow: reconnect and resume');
      else write(change.frame);
    },
    beat() {
      if (!isAlive) {
        socket.terminate();
        return;
      }
      isAlive = false;
      socket.ping();
    },
    close,
  };
}
