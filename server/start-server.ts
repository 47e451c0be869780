import type { Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import type { RequestHandler } from 'express';
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
import { watchSilence } from './ingest/watch-silence.ts';
import type { LiveOptions } from './live/create-live.ts';
import { openCore } from './open-core.ts';
import { createReadiness } from './readiness.ts';
import { startBroker } from './start-broker.ts';

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

const builtApp = path.join(path.dirname(fileURLToPath(import.meta.url)), '..', 'dist');

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

function routesOf(context: Context, options: StartOptions, isRunning: () => boolean): RequestHandler[] {
  const metrics = createMetrics({ liveConnections: context.live.connections });
  const readiness = createReadiness(context.core, { broker: context.broker.isUp, demo: () => true, running: isRunning });
  return [
    localRoutes(readiness, metrics.registry),
    openApiRoute(context.publicUrl),
    mountEndpoints(context.handlers, {
      reader: context.core.reader,
      authenticate: context.auth.sessions.authenticate,
      checkAnswers: options.checkAnswers ?? false,
      requestSeconds: metrics.requestSeconds,
    }),
  ];
}

/** What is open, closed in the reverse order; also when the start fails halfway. */
function createClosers(): { add(close: () => Promise<void>): void; closeAll(): Promise<void> } {
  const closers: (() => Promise<void>)[] = [];
  return {
    add: (close) => void closers.push(close),
    async closeAll() {
      for (let close = closers.pop(); close !== undefined; close = closers.pop()) await close();
    },
  };
}

/** Starts the whole server in this process: database, broker, HTTP, and what runs beside them. */
export async function startServer(config: Config, options: StartOptions = {}): Promise<RunningServer> {
  const closers = createClosers();
  try {
    return await start(config, options, closers);
  } catch (error) {
    await closers.closeAll();
    throw error;
  }
}

async function start(config: Config, options: StartOptions, closers: ReturnType<typeof createClosers>): Promise<RunningServer> {
  const log = options.log ?? pino({ level: 'info' }, pino.destination(2));
  const opened = await openCore(config, options.clock ?? systemClock, log);
  closers.add(opened.close);
  const { core } = opened;
  let url = urlOf(config, config.PORT);
  const context = await createContext(core, { ownUrl: () => url, live: options.live });
  closers.add(context.close);

  const broker = await startBroker(context);
  closers.add(broker.close);
  await context.alarms.start();
  const silence = watchSilence(core, context.ingest);
  closers.add(silence.close);

  let isRunning = true;
  const http = createHttp({ config, log, appFolder: options.appFolder ?? builtApp, routes: routesOf(context, options, () => isRunning) });
  context.live.attach(http);
  const httpPort = await listen(http, config.PORT, config.HOST);
  closers.add(async () => {
    isRunning = false;
    const closing = closeHttp(http);
    await context.live.close();
    await closing;
  });
  url = urlOf(config, httpPort);
  return { url, httpPort, mqttPort: broker.port, core, context, close: closers.closeAll };
}
