import type { z } from 'zod';
import type { Role } from '../domain/role.ts';

/**
 * Who may call an endpoint: `anyone` without signing in, any person `signed-in`, or the lowest role that may.
 * For a role, the site is found from the first path parameter (`siteId`, `systemId`, `deviceId`, ...): a person
 * outside that site gets 404, one below the role 403.
 */
export type Access = 'anyone' | 'signed-in' | Role;

export interface Endpoint {
  readonly method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  /** Express style, below `/api`: `/systems/:systemId/tests`. */
  readonly path: string;
  readonly who: Access;
  readonly summary: string;
  /** 201 for a POST that makes something, 200 else, unless said here. */
  readonly status?: 200 | 201;
  readonly query?: z.ZodType;
  readonly body?: z.ZodType;
  readonly answer: z.ZodType;
}

/** Keeps the literal types, so that the client and the server infer params, query, body and answer from one place. */
export function endpoint<const T extends Endpoint>(described: T): T {
  return described;
}

type ParamNames<Path extends string> = Path extends `${string}:${infer Name}/${infer Rest}`
  ? Name | ParamNames<`/${Rest}`>
  : Path extends `${string}:${infer Name}`
    ? Name
    : never;

export type ParamsOf<T extends Endpoint> = Record<ParamNames<T['path']>, string>;
export type QueryOf<T extends Endpoint> = T['query'] extends z.ZodType ? z.output<T['query']> : undefined;
export type QueryInputOf<T extends Endpoint> = T['query'] extends z.ZodType ? z.input<T['query']> : undefined;
export type BodyOf<T extends Endpoint> = T['body'] extends z.ZodType ? z.output<T['body']> : undefined;
export type BodyInputOf<T extends Endpoint> = T['body'] extends z.ZodType ? z.input<T['body']> : undefined;
export type AnswerOf<T extends Endpoint> = z.output<T['answer']>;

export function statusOf(described: Endpoint): 200 | 201 {
  return described.status ?? (described.method === 'post' ? 201 : 200);
}
