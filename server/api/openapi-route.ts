import { Router } from 'express';
import { makeOpenApi } from './openapi.ts';

export function openApiRoute(publicUrl: () => string): Router {
  const router = Router();
  let document: ReturnType<typeof makeOpenApi> | undefined;
  router.get('/openapi.json', (_request, response) => {
    document ??= makeOpenApi(publicUrl());
    response.json(document);
  });
  return router;
}
