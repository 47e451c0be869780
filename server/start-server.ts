import type { Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import pino, { type Logger } from 'pino';
import { mountEndpoints } from './api/mount.ts';
import { openApiRoute } from './api/openapi-route.ts';
import { type Clock, systemClock } from './clock.ts';
import type { Config } from './config.ts';
import { createContext, type Context } from './context.ts';
import type { Core } from './core.ts';
import { createHttp } from './http.ts';
import { localRoutes } from './http/local-routes.ts';
import { createMetrics } from './http/metrics.ts';
import type { LiveOptions } from './live/create-live.ts';
import { openCore } from './open-core.ts';
import { createReadiness } from './readiness.ts';

export interface StartOptions {
  clock?: Clock;
  log?: Logger;
  /** Holds every answer to its schema: for tests. */
  checkAnswers?: boolean;
  /** Where the built web app lies. */
  appFolder?: string;
  live?: LiveOptions;
}

export interface RunningServer {
  url: string;
  httpPort: number;
  mqttPort: number;
  core: Core;
  context: Context;
  /** Takes nothing new, commits what came in, says goodbye to devices and browsers, closes the database. */
  close(): Promise<void>;
}

/** How long open requests have at a stop. */
const DRAIN_MS = 3_000;

function listen(server: Server, port: number, host: string): Promise<number> {
  return new Promise((resolve, reject) => {
    server.once('error', reject);
    server.listen(port, host, () => resolve((server.address() as AddressInfo).port));
  });
}

function closeHttp(server: Server): Promise<void> {
  return new Promise((resolve) => {
    const cut = setTimeout(() => server.closeAllConnections(), DRAIN_MS);
    server.close(() => {
      clearTimeout(cut);
      resolve();
    });
    server.closeIdleConnections();
  });
}

/** Where a person on this machine reaches a server that listens on `host`. */
function urlOf(config: Config, port: number): string {
  const scheme = config.TLS_CERT === undefined ? 'http' : 'https';
  const host = config.HOST === '0.0.0.0' || config.HOST === '::' ? 'localhost' : config.HOST;
  return `${scheme}://${host.includes(':') ? `[${host}]` : host}:${port}`;
}

/** Starts the whole server in this process: database, broker, HTTP, and what runs beside them. */
export async function startServer(config: Config, options: StartOptions = {}): Promise<RunningServer> {
  const log = options.log ?? pino({ level: 'info' }, pino.destination(2));
  const opened = await openCore(config, options.clock ?? systemClock, log);
  const { core } = opened;
  let url = urlOf(config, config.PORT);
  const context = await createContext(core, { ownUrl: () => url, live: options.live });
  let isRunning = true;

  const metrics = createMetrics({ liveConnections: context.live.connections });
  const readiness = createReadiness(core, { broker: context.broker.isUp, demo: () => true, running: () => isRunning });
  const http = createHttp({
    config,
    log,
    appFolder: options.appFolder ?? path.join(path.dirname(fileURLToPath(import.meta.url)), '..', 'dist'),
    routes: [
      localRoutes(readiness, metrics.registry),
      openApiRoute(context.publicUrl),
      mountEndpoints(context.handlers, {
        reader: core.reader,
        authenticate: context.auth.sessions.authenticate,
        checkAnswers: options.checkAnswers ?? false,
        requestSeconds: metrics.requestSeconds,
      }),
    ],
  });
  context.live.attach(http);
  const httpPort = await listen(http, config.PORT, config.HOST);
  url = urlOf(config, httpPort);

  return {
    url,
    httpPort,
    mqttPort: 0,
    core,
    context,
    async close() {
      isRunning = false;
      const closing = closeHttp(http);
      await context.live.close();
      await closing;
      await context.jobs.close();
      await context.notify.close();
      await opened.close();
    },
  };
}
