import { OpenApiGeneratorV31, OpenAPIRegistry } from '@asteasolutions/zod-to-openapi';
import { z } from 'zod';
import { type Endpoint, statusOf } from '#shared/contract/endpoint.ts';
import { endpoints } from '#shared/contract/endpoints.ts';
import { problemSchema } from '#shared/contract/problem.ts';

const whoMay: Record<Endpoint['who'], string> = {
  anyone: 'Anybody may call it.',
  'signed-in': 'Whoever is signed in may call it.',
  viewer: 'Every role of the site may call it.',
  sitter: 'Sitter, keeper and owner of the site may call it.',
  keeper: 'Keeper and owner of the site may call it.',
  owner: 'Only an owner of the site may call it.',
};

function parametersOf(path: string): z.ZodObject {
  const names = [...path.matchAll(/:([A-Za-z]+)/g)].map(([, name]) => name ?? '');
  return z.object(Object.fromEntries(names.map((name) => [name, z.string()])));
}

function problemsOf(described: Endpoint): Record<string, string> {
  return {
    ...(described.body !== undefined || described.query !== undefined ? { 422: 'Bad input, with `errors`' } : {}),
    ...(described.who !== 'anyone' ? { 401: 'Not signed in' } : {}),
    ...(described.who !== 'anyone' && described.who !== 'signed-in' ? { 403: "One's role may not" } : {}),
    ...(described.path.includes(':') ? { 404: 'Not there, or of a site that one is not in' } : {}),
    ...(described.method !== 'get' ? { 409: 'A rule forbids it' } : {}),
    429: 'Too many requests',
  };
}

/** A query may be an object, or a refined or intersected one: its parts are what can be listed as parameters. */
function queryObject(schema: z.ZodType): z.ZodObject {
  if (schema instanceof z.ZodIntersection) {
    return queryObject(schema.def.left as z.ZodType).extend(queryObject(schema.def.right as z.ZodType).shape);
  }
  if (schema instanceof z.ZodObject) return z.object(schema.shape);
  throw new Error('A query must be an object');
}

function register(registry: OpenAPIRegistry, name: string, described: Endpoint): void {
  const problem = (description: string) => ({ description, content: { 'application/problem+json': { schema: problemSchema } } });
  const answers = Object.entries(problemsOf(described)).map(([status, description]) => [status, problem(description)] as const);
  registry.registerPath({
    method: described.method,
    path: `/api${described.path.replace(/:([A-Za-z]+)/g, '{$1}')}`,
    operationId: name,
    summary: described.summary,
    description: whoMay[described.who],
    ...(described.who === 'anyone' ? {} : { security: [{ bearer: [] }] }),
    request: {
      params: parametersOf(described.path),
      ...(described.query === undefined ? {} : { query: queryObject(described.query) }),
      ...(described.body === undefined ? {} : { body: { content: { 'application/json': { schema: described.body } } } }),
    },
    responses: {
      [statusOf(described)]: { description: 'Done', content: { 'application/json': { schema: described.answer } } },
      ...Object.fromEntries(answers),
    },
  });
}

/** The API as OpenAPI 3.1, made from the endpoint table. */
export function makeOpenApi(serverUrl: string) {
  const registry = new OpenAPIRegistry();
  registry.registerComponent('securitySchemes', 'bearer', { type: 'http', scheme: 'bearer', bearerFormat: 'JWT' });
  for (const [name, described] of Object.entries(endpoints)) register(registry, name, described);
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: { title: 'Steadfall', version: '1', description: 'Times are RFC 3339 strings, except in point columns (epoch milliseconds).' },
    servers: [{ url: serverUrl }],
  });
}
