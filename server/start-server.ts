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
import { type Demo, startDemo } from './demo/start-demo.ts';
import { createHttp } from './http.ts';
import { localRoutes } from './http/local-routes.ts';
import { createMetrics } from './http/metrics.ts';
import { watchSilence } from './ingest/watch-silence.ts';
import type { LiveOptions } from './live/create-live.ts';
import { openCore } from './open-core.ts';
import { createReadiness, type ReadinessStates } from './readiness.ts';
import { startBroker } from './start-broker.ts';

export interface StartOptions {
  clock?: Clock;
  log?: Logger;
  /** Holds every answer to its schema: for tests. */
  checkAnswers?: boolean;
  /** Where the built web app lies. */
  appFolder?: string;
  live?: LiveOptions;
  /** Told one line at a time how a long start goes. */
  onProgress?: (line: string) => void;
}

export interface RunningServer {
  url: string;
  httpPort: number;
  mqttPort: number;
  mqttUrl: string;
  core: Core;
  context: Context;
  /** Null without the demo. */
  demo: Promise<Demo> | null;
  /** Resolves when everything is up, the demo's history included. */
  ready: Promise<void>;
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

/** Where somebody on this machine reaches a server that listens on `HOST`. */
function addressOf({ HOST }: Config, port: number): string {
  const host = HOST === '0.0.0.0' || HOST === '::' ? 'localhost' : HOST;
  return `${host.includes(':') ? `[${host}]` : host}:${port}`;
}

function urlOf(config: Config, port: number): string {
  return `${config.TLS_CERT === undefined ? 'http' : 'https'}://${addressOf(config, port)}`;
}

function mqttUrlOf(config: Config, port: number): string {
  return `${config.TLS_CERT === undefined ? 'mqtt' : 'mqtts'}://${addressOf(config, port)}`;
}

function routesOf(context: Context, options: StartOptions, states: ReadinessStates): RequestHandler[] {
  const metrics = createMetrics({ liveConnections: context.live.connections });
  return [
    localRoutes(createReadiness(context.core, states), metrics.registry),
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

  let demo: Promise<Demo> | null = null;
  // Ended after the broker, as real devices outlive it: no last will then tells of a device that never went away.
  closers.add(() => endDemo(demo, log));
  const broker = await startBroker(context);
  closers.add(broker.close);
  await context.alarms.start();
  const silence = watchSilence(core, context.ingest);
  closers.add(silence.close);

  let isRunning = true;
  let isDemoReady = () => !config.DEMO;
  const states = { broker: context.broker.isUp, demo: () => isDemoReady(), running: () => isRunning };
  const http = createHttp({ config, log, appFolder: options.appFolder ?? builtApp, routes: routesOf(context, options, states) });
  context.live.attach(http);
  const httpPort = await listen(http, config.PORT, config.HOST);
  closers.add(async () => {
    isRunning = false;
    const closing = closeHttp(http);
    await context.live.close();
    await closing;
  });
  url = urlOf(config, httpPort);
  const mqttUrl = config.MQTT_URL ?? mqttUrlOf(config, broker.port);

  if (config.DEMO) {
    const { publishDue } = context.schedules;
    demo = startDemo({ core, mqttUrl, publishSchedules: publishDue, print: options.onProgress ?? (() => {}) });
  }
  const ready =
    demo === null
      ? Promise.resolve()
      : demo.then((started) => {
          isDemoReady = started.isReady;
          return started.ready;
        });
  // Whoever waits for it hears of a failure too.
  ready.catch((error: unknown) => log.error({ err: error }, 'the demo could not be started'));
  return { url, httpPort, mqttPort: broker.port, mqttUrl, core, context, demo, ready, close: closers.closeAll };
}

async function endDemo(demo: Promise<Demo> | null, log: Logger): Promise<void> {
  try {
    await (await demo)?.close();
  } catch (error) {
    log.warn({ err: error }, 'the demo had not started');
  }
}
