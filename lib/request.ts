import { endpoints, type EndpointName } from '#shared/contract/endpoints.ts';
import type { AnswerOf, BodyInputOf, Endpoint, ParamsOf, QueryInputOf } from '#shared/contract/endpoint.ts';
import { ApiError, problemOf } from './api-problem.ts';
import { connection } from './connection.ts';

type Table = typeof endpoints;

type ParamsPart<E extends Endpoint> = [keyof ParamsOf<E>] extends [never] ? { params?: undefined } : { params: ParamsOf<E> };
type QueryPart<E extends Endpoint> = { query?: QueryInputOf<E> };
type BodyPart<E extends Endpoint> = undefined extends BodyInputOf<E> ? { body?: BodyInputOf<E> } : { body: BodyInputOf<E> };

/** What a call of this endpoint takes: its path parameters, query and body, or a form for a file. */
export type CallOptions<Name extends EndpointName> = ParamsPart<Table[Name]> &
  QueryPart<Table[Name]> &
  BodyPart<Table[Name]> & { form?: FormData; signal?: AbortSignal };

export type Answer<Name extends EndpointName> = AnswerOf<Table[Name]>;

/** `[]` where an endpoint needs nothing, so that `call('me')` is enough. */
export type CallArguments<Name extends EndpointName> =
  Record<string, never> extends CallOptions<Name> ? [options?: CallOptions<Name>] : [options: CallOptions<Name>];

/** The same without the types of one endpoint. */
export interface LooseOptions {
  params?: Record<string, string>;
  query?: unknown;
  body?: unknown;
  form?: FormData;
  signal?: AbortSignal;
}

/** The address below `/api` of an endpoint, with its path parameters and query filled in. */
export function addressOf(described: Endpoint, options: LooseOptions): string {
  const path = described.path.replace(/:(\w+)/g, (_, name: string) => {
    const value = options.params?.[name];
    if (value === undefined) throw new Error(`${described.path} needs ${name}`);
    return encodeURIComponent(value);
  });
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries(options.query ?? {})) {
    if (value !== undefined && value !== null) query.set(name, String(value));
  }
  const text = query.toString();
  return `/api${path}${text === '' ? '' : `?${text}`}`;
}

async function jsonOf(response: Response): Promise<unknown> {
  try {
    return await response.json();
  } catch {
    // A proxy's page instead of JSON: the status alone tells what kind of problem it is.
    return null;
  }
}

/**
 * One request by the endpoint table, its answer checked against the contract.
 * @throws {ApiError} for anything but a success; an abort passes through.
 */
export async function request<Name extends EndpointName>(
  name: Name,
  options: LooseOptions,
  accessToken: string | null,
): Promise<Answer<Name>> {
  const described: Endpoint = endpoints[name];
  const headers: Record<string, string> = { accept: 'application/json' };
  if (accessToken !== null) headers['authorization'] = `Bearer ${accessToken}`;
  if (options.body !== undefined) headers['content-type'] = 'application/json';

  let response: Response;
  try {
    response = await fetch(addressOf(described, options), {
      method: described.method.toUpperCase(),
      headers,
      body: options.form ?? (options.body === undefined ? undefined : JSON.stringify(options.body)),
      credentials: 'same-origin',
      signal: options.signal,
    });
  } catch (error) {
    if (options.signal?.aborted === true) throw error;
    connection.unheard();
    throw new ApiError({ kind: 'unreachable' });
  }
  const body = await jsonOf(response);
  // A gateway that answers for a server that is down is no sign of life from the server.
  if (response.status === 502 || response.status === 503 || response.status === 504) connection.unheard();
  else connection.heard();
  if (!response.ok) throw new ApiError(problemOf(response.status, body));
  const answer = described.answer.safeParse(body);
  if (!answer.success) throw new ApiError({ kind: 'unexpected', detail: `${name}: ${answer.error.message}` });
  return answer.data as Answer<Name>;
}
