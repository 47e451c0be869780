import type { Request, Response } from 'express';
import type { AnswerOf, BodyOf, Endpoint, ParamsOf, QueryOf } from '#shared/contract/endpoint.ts';
import type { EndpointName, endpoints } from '#shared/contract/endpoints.ts';
import type { Role } from '#shared/domain/role.ts';
import type { Person } from '../access/person.ts';

/** What a handler gets once the request was checked: sign-in, membership, role, params, query and body. */
export interface Call<E extends Endpoint> {
  params: ParamsOf<E>;
  query: QueryOf<E>;
  body: BodyOf<E>;
  /** Set whenever the endpoint is not for `anyone`. */
  person: Person;
  /** The site that the path belongs to and one's role there; set whenever the endpoint asks for a role. */
  site: { id: string; role: Role };
  /** Answers 200 in place of 201: the same id and body came before. */
  repeated(): void;
  request: Request;
  response: Response;
}

export type Handler<E extends Endpoint> = (call: Call<E>) => Promise<AnswerOf<E>>;

export type Handlers<Names extends EndpointName> = { [Name in Names]: Handler<(typeof endpoints)[Name]> };

/** Types the handlers of one resource by the endpoint table; all of them together must cover the table. */
export function handlers<Names extends EndpointName>(these: Handlers<Names>): Handlers<Names> {
  return these;
}
