import { type RequestHandler, Router } from 'express';
import type { Registry } from 'prom-client';
import { isLocal } from './is-local.ts';

/** What must be true before the server counts as ready, by name. */
export type ReadinessChecks = () => Promise<Record<string, boolean>>;

const localOnly: RequestHandler = (request, _response, next) => {
  if (isLocal(request)) next();
  else next('router');
};

/** For whoever runs the server, from this machine or its network; to anybody else these do not exist. */
export function localRoutes(readiness: ReadinessChecks, registry: Registry): Router {
  const router = Router();
  router.use(['/health', '/ready', '/metrics'], localOnly);
  router.get('/health', (_request, response) => void response.json({ status: 'ok' }));
  router.get('/ready', async (_request, response) => {
    const checks = await readiness();
    const isReady = Object.values(checks).every(Boolean);
    response.status(isReady ? 200 : 503).json({ ready: isReady, checks });
  });
  router.get('/metrics', async (_request, response) => {
    response.type(registry.contentType).send(await registry.metrics());
  });
  return router;
}
