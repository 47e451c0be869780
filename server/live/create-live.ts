import type { IncomingMessage, Server } from 'node:http';
import type { Duplex } from 'node:stream';
import { type WebSocket, WebSocketServer } from 'ws';
import { liveCloseCodes, livePath } from '#shared/contract/live.ts';
import type { AccessChanges } from '../access/access-changes.ts';
import type { Person } from '../access/person.ts';
import { isOwnOrigin } from '../access/own-origin.ts';
import type { Core } from '../core.ts';
import { NotFoundError } from '../errors.ts';
import { type LoggedChange, openChangeLog } from './change-log.ts';
import { isSessionOpen, sitesOfVisibleSystems } from './live-access.ts';
import { createLiveConnection, type LiveConnection } from './live-connection.ts';
import { createTickets, TICKET_SECONDS, type TicketHolder } from './tickets.ts';

export interface LiveOptions {
  /** What may wait for a slow browser before it is cut, bytes. */
  maxBufferedBytes?: number;
  beatEveryMs?: number;
}

export interface Live {
  /** @throws {NotFoundError} when one of the systems does not exist or belongs to a site that the person is not in. */
  createTicket(person: Person, systemIds: string[]): Promise<{ ticket: string; expiresIn: number }>;
  /** Takes over the upgrades of a server that is about to listen. */
  attach(server: Server): void;
  connections(): number;
  /** Says goodbye (1001) to all browsers and takes no new ones. */
  close(): Promise<void>;
}

const PAGE = 1_000;

function refuse(socket: Duplex, status: string): void {
  socket.end(`HTTP/1.1 ${status}\r\nConnection: close\r\nContent-Length: 0\r\n\r\n`);
}

/** What happened since, pushed to browsers after each commit, from the rows that the commit left. */
export function createLive(core: Core, changes: AccessChanges, options: LiveOptions = {}): Live {
  const { clock, reader, writer, config, log } = core;
  const { maxBufferedBytes = 4 * 1024 * 1024, beatEveryMs = 25_000 } = options;
  const tickets = createTickets(clock);
  const changeLog = openChangeLog(core.databaseFile);
  // Browsers only ever listen: anything larger than a small frame is an attack. Compression would cost memory per browser.
  const sockets = new WebSocketServer({ noServer: true, maxPayload: 1_024, perMessageDeflate: false });
  const open = new Set<LiveConnection>();
  let sentSeq = changeLog.newest();
  let isClosing = false;

  function push(): void {
    if (open.size === 0) return;
    try {
      let page: LoggedChange[];
      do {
        page = changeLog.after(sentSeq, PAGE);
        for (const change of page) {
          sentSeq = change.seq;
          for (const connection of open) connection.send(change);
        }
      } while (page.length === PAGE);
    } catch (error) {
      // The commit that called stands; browsers come back and resume from what they have.
      log.error({ err: error }, 'changes could not be read: the live streams are closed');
      for (const connection of open) connection.close(1011, 'try again');
    }
  }

  /** Looks again at what a connection rests on, and closes it when that is gone. */
  async function recheck(connection: LiveConnection): Promise<void> {
    const { sessionId, userId } = connection.holder;
    if (!(await isSessionOpen(reader, sessionId, clock.nowMs()))) {
      connection.close(liveCloseCodes.signedOut, 'signed out');
      return;
    }
    const visible = await sitesOfVisibleSystems(reader, userId, [...connection.sites.keys()]);
    if (visible.size < connection.sites.size) connection.close(liveCloseCodes.roleLost, 'no role any more');
  }

  function recheckWhere(isConcerned: (connection: LiveConnection) => boolean): void {
    for (const connection of open) {
      if (!isConcerned(connection)) continue;
      recheck(connection).catch((error: unknown) => {
        log.error({ err: error }, 'the access of a live stream could not be checked: it is closed');
        connection.close(1011, 'try again');
      });
    }
  }

  async function accept(socket: WebSocket, holder: TicketHolder, since: number | null): Promise<void> {
    // The ticket may be older than a sign-out or the loss of a role.
    if (!(await isSessionOpen(reader, holder.sessionId, clock.nowMs()))) return socket.close(liveCloseCodes.signedOut, 'signed out');
    const visible = await sitesOfVisibleSystems(reader, holder.userId, holder.systemIds);
    if (visible.size < new Set(holder.systemIds).size) return socket.close(liveCloseCodes.roleLost, 'no role any more');
    if (socket.readyState !== socket.OPEN) return;
    // Nothing was pushed while nobody listened.
    if (open.size === 0) sentSeq = changeLog.newest();
    const connection = createLiveConnection(socket, holder, visible, maxBufferedBytes);
    connection.resume(changeLog, since ?? changeLog.newest());
    open.add(connection);
    socket.on('close', () => open.delete(connection));
    // What was taken away since the first look found nobody here to tell.
    await recheck(connection);
  }

  function upgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void {
    socket.on('error', (error) => log.debug({ err: error }, 'an upgrade broke'));
    const address = request.url ?? '/';
    if (!URL.canParse(address, 'http://localhost')) return refuse(socket, '404 Not Found');
    const url = new URL(address, 'http://localhost');
    if (url.pathname !== livePath || isClosing) return refuse(socket, isClosing ? '503 Service Unavailable' : '404 Not Found');
    const { origin, host } = request.headers;
    if (origin !== undefined && !isOwnOrigin(origin, host, config.PUBLIC_URL)) return refuse(socket, '403 Forbidden');
    const holder = tickets.redeem(url.searchParams.get('ticket') ?? '');
    if (holder === null) return refuse(socket, '401 Unauthorized');
    const since = url.searchParams.get('since');
    if (since !== null && !/^\d{1,15}$/.test(since)) return refuse(socket, '422 Unprocessable Content');
    sockets.handleUpgrade(request, socket, head, (webSocket) => {
      webSocket.on('error', (error) => log.debug({ err: error }, 'a live stream broke'));
      accept(webSocket, holder, since === null ? null : Number(since)).catch((error: unknown) => {
        log.error({ err: error }, 'a live stream could not be opened');
        webSocket.close(1011, 'try again');
      });
    });
  }

  const unsubscribers = [
    writer.onCommitted(push),
    changes.subscribe((change) =>
      recheckWhere(({ holder }) =>
        change.kind === 'session-ended' ? holder.sessionId === change.sessionId : holder.userId === change.userId,
      ),
    ),
  ];
  const heart = setInterval(() => {
    for (const connection of open) connection.beat();
    recheckWhere(() => true);
  }, beatEveryMs);
  heart.unref();

  return {
    async createTicket(person, systemIds) {
      const visible = await sitesOfVisibleSystems(reader, person.userId, systemIds);
      if (systemIds.some((id) => !visible.has(id))) {
        throw new NotFoundError('One of the systems does not exist, or belongs to a site that you are not in');
      }
      return { ticket: tickets.issue({ ...person, systemIds }), expiresIn: TICKET_SECONDS };
    },
    attach(server) {
      server.on('upgrade', upgrade);
    },
    connections: () => open.size,
    async close() {
      isClosing = true;
      clearInterval(heart);
      for (const unsubscribe of unsubscribers) unsubscribe();
      for (const client of sockets.clients) client.close(1001, 'the server stops');
      const cut = setTimeout(() => sockets.clients.forEach((client) => client.terminate()), 1_000);
      await new Promise<void>((resolve) => sockets.close(() => resolve()));
      clearTimeout(cut);
      changeLog.close();
    },
  };
}
