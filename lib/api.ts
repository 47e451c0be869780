import { endpoints, type EndpointName } from '#shared/contract/endpoints.ts';
import type { Endpoint } from '#shared/contract/endpoint.ts';
import { ApiError } from './api-problem.ts';
import { request, type Answer, type CallArguments, type LooseOptions } from './request.ts';
import { session } from './session.ts';

/**
 * Calls the API by the name of the endpoint: `call('createTest', { params: { systemId }, body })`. Adds the access token,
 * and tries once more with a new one when the server does not take it.
 * @throws {ApiError} for anything but a success.
 */
export async function call<Name extends EndpointName>(name: Name, ...given: CallArguments<Name>): Promise<Answer<Name>> {
  return send(name, given[0] ?? {});
}

/** `call` for options that were checked before and kept, such as those of the outbox. */
export async function send<Name extends EndpointName>(name: Name, options: LooseOptions): Promise<Answer<Name>> {
  const described: Endpoint = endpoints[name];
  if (described.who === 'anyone') return request(name, options, null);
  const token = await session.accessToken();
  if (token === null) throw new ApiError({ kind: 'signed-out', detail: '' });
  try {
    return await request(name, options, token);
  } catch (error) {
    if (!(error instanceof ApiError) || error.problem.kind !== 'signed-out') throw error;
    const renewed = await session.refresh();
    if (renewed === null) throw error;
    return request(name, options, renewed);
  }
}
