import { type RequestHandler, Router } from 'express';
import type { Histogram } from 'prom-client';
import type { z } from 'zod';
import { type Endpoint, statusOf } from '#shared/contract/endpoint.ts';
import { type EndpointName, endpoints } from '#shared/contract/endpoints.ts';
import { isAtLeast } from '#shared/domain/role.ts';
import type { Person } from '../access/person.ts';
import { isSiteParameter, siteOf, type SiteParameter } from '../access/site-of.ts';
import type { Reader } from '../db/open.ts';
import { BadInputError, ForbiddenError, NotFoundError } from '../errors.ts';
import { bearerOf } from './bearer.ts';
import { checkAnswer } from './check-answer.ts';
import type { Handlers } from './route.ts';

export interface MountOptions {
  reader: Reader;
  /** @throws {NotSignedInError} unless the token names a session that still stands. */
  authenticate(accessToken: string): Promise<Person>;
  /** Holds every answer to its schema; costs time, so for tests and development. */
  checkAnswers: boolean;
  requestSeconds?: Histogram<'endpoint' | 'status'>;
}

/** A handler whose types were checked against its endpoint where it was written. */
type CheckedHandler = (call: object) => Promise<unknown>;

function parsed(schema: z.ZodType | undefined, value: unknown, prefix: string): unknown {
  if (schema === undefined) return undefined;
  const result = schema.safeParse(value);
  if (result.success) return result.data;
  const errors = result.error.issues.map((issue) => ({
    path: [prefix, ...issue.path].filter((part) => part !== '').join('.'),
    message: issue.message,
  }));
  throw new BadInputError(errors);
}

/** The first path parameter tells the site. @throws {Error} at mounting, for an endpoint whose site cannot be found. */
function siteParameterOf(described: Endpoint): SiteParameter {
  const name = /:([A-Za-z]+)/.exec(described.path)?.[1] ?? '';
  if (!isSiteParameter(name)) throw new Error(`${described.path} asks for a role, but its first parameter tells no site`);
  return name;
}

function routeOf(name: EndpointName, handler: CheckedHandler, options: MountOptions): RequestHandler {
  const described: Endpoint = endpoints[name];
  const { who } = described;
  const siteParameter = who === 'anyone' || who === 'signed-in' ? null : siteParameterOf(described);

  return async (request, response) => {
    const startedMs = performance.now();
    response.once('finish', () => {
      options.requestSeconds?.observe({ endpoint: name, status: response.statusCode }, (performance.now() - startedMs) / 1000);
    });
    const person = who === 'anyone' ? undefined : await options.authenticate(bearerOf(request));
    let site: Awaited<ReturnType<typeof siteOf>> = null;
    if (siteParameter !== null && person !== undefined) {
      const id = request.params[siteParameter];
      site = typeof id === 'string' ? await siteOf(options.reader, person.userId, siteParameter, id) : null;
      // The same words whether it belongs to others or to nobody, so that ids cannot be tried out.
      if (site === null) throw new NotFoundError('It does not exist, or belongs to a site that you are not in');
      if (who !== 'anyone' && who !== 'signed-in' && !isAtLeast(site.role, who)) {
        throw new ForbiddenError(`This takes the role ${who}; you are ${site.role} of this site`);
      }
    }
    const query = parsed(described.query, request.query, '');
    const body = parsed(described.body, request.body, '');
    let status: number = statusOf(described);
    const repeated = () => (status = 200);
    const answer = await handler({ params: request.params, query, body, person, site, repeated, request, response });
    if (response.headersSent) return;
    if (options.checkAnswers) checkAnswer(name, described, answer);
    response.status(status).json(answer);
  };
}

/** Every route of the endpoint table, held to everything that the table says of it. */
export function mountEndpoints(handlers: Handlers<EndpointName>, options: MountOptions): Router {
  const router = Router();
  for (const name of Object.keys(endpoints) as EndpointName[]) {
    const { method, path } = endpoints[name];
    router[method](path, routeOf(name, handlers[name] as CheckedHandler, options));
  }
  return router;
}
