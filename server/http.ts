import { existsSync, readFileSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import { createServer as createTlsServer } from 'node:https';
import path from 'node:path';
import compression from 'compression';
import cookieParser from 'cookie-parser';
import express, { type Express, type RequestHandler } from 'express';
import { ipKeyGenerator, rateLimit } from 'express-rate-limit';
import helmet from 'helmet';
import type { Logger } from 'pino';
import { pinoHttp } from 'pino-http';
import { problemOfStatus } from './api/problem.ts';
import { answerErrors, noSuchEndpoint, sendProblem } from './api/send-problem.ts';
import type { Config } from './config.ts';
import { contentSecurityPolicy } from './http/content-security-policy.ts';
import { staticApp } from './http/static-app.ts';

export interface HttpOptions {
  config: Config;
  log: Logger;
  /** Where the built web app lies. */
  appFolder: string;
  /** What answers below `/api`, in this order. */
  routes: RequestHandler[];
}

/** From one address: far above what many open screens ask for, far below what would hold the server up. */
const REQUESTS_PER_MINUTE = 3_000;

/** Path without its query, which may hold a ticket; no headers, which hold tokens. */
function loggedRequest(request: { id: unknown; method: string; url: string }) {
  return { id: request.id, method: request.method, path: request.url.split('?')[0] };
}

function requestLog(log: Logger): RequestHandler {
  return pinoHttp({
    logger: log,
    serializers: { req: loggedRequest, res: (response: { statusCode: number }) => ({ statusCode: response.statusCode }) },
    // Asked every few seconds by whoever watches the server, and answered 503 until it is ready.
    autoLogging: { ignore: (request) => /^\/api\/(health|ready|metrics)$/.test(request.url ?? '') },
    customLogLevel: (_request, { statusCode }, error) => {
      if (error !== undefined || statusCode >= 500) return 'error';
      return statusCode === 403 || statusCode === 429 ? 'info' : 'debug';
    },
  });
}

function trustedProxies(setting: string): string | number | boolean {
  if (setting === 'true' || setting === 'false') return setting === 'true';
  return /^\d+$/.test(setting) ? Number(setting) : setting;
}

function securityHeaders(options: HttpOptions, usesTls: boolean): RequestHandler {
  const index = path.join(options.appFolder, 'index.html');
  const directives = contentSecurityPolicy(existsSync(index) ? readFileSync(index, 'utf8') : '');
  return helmet({
    contentSecurityPolicy: { useDefaults: false, directives },
    strictTransportSecurity: usesTls ? { maxAge: 31_536_000 } : false,
    referrerPolicy: { policy: 'same-origin' },
  });
}

function createApp(options: HttpOptions, usesTls: boolean): Express {
  const { config, log } = options;
  const app = express();
  app.disable('x-powered-by');
  if (config.TRUST_PROXY !== undefined) app.set('trust proxy', trustedProxies(config.TRUST_PROXY));
  app.use(requestLog(log));
  app.use(securityHeaders(options, usesTls));
  app.use(compression());
  app.use(
    '/api',
    (_request, response, next) => {
      response.set('Cache-Control', 'no-store');
      next();
    },
    rateLimit({
      windowMs: 60_000,
      limit: REQUESTS_PER_MINUTE,
      standardHeaders: 'draft-8',
      legacyHeaders: false,
      validate: false,
      keyGenerator: (request) => ipKeyGenerator(request.ip ?? 'unknown'),
      handler: (_request, response) => sendProblem(response, problemOfStatus(429, 'Too many requests: wait a minute')),
    }),
    cookieParser(),
    express.json({ limit: '1mb' }),
    ...options.routes,
    noSuchEndpoint,
  );
  app.use(staticApp(options.appFolder));
  app.use(noSuchEndpoint);
  app.use(answerErrors(log));
  return app;
}

/** The HTTP server of app and API, over TLS when a certificate is set; it does not listen yet. */
export function createHttp(options: HttpOptions): Server {
  const { TLS_CERT, TLS_KEY } = options.config;
  if (TLS_CERT === undefined || TLS_KEY === undefined) return createServer(createApp(options, false));
  return createTlsServer({ cert: readFileSync(TLS_CERT), key: readFileSync(TLS_KEY) }, createApp(options, true));
}
