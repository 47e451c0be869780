import type { Problem } from '#shared/contract/problem.ts';
import { BadInputError, type FieldError, ForbiddenError, NotFoundError, NotSignedInError, RuleError, TooManyError } from '../errors.ts';

export interface ProblemAnswer {
  body: Problem;
  headers: Record<string, string>;
}

const titles: Record<number, string> = {
  401: 'Not signed in',
  403: 'Not allowed',
  404: 'Not found',
  409: 'A rule forbids it',
  413: 'Too large',
  415: 'Unsupported media type',
  422: 'Bad input',
  429: 'Too many requests',
  500: 'Something went wrong here',
  503: 'Not ready',
};

export function problemOfStatus(status: number, detail: string, more: Partial<Problem> = {}): ProblemAnswer {
  // RFC 9457 4.2.1: `about:blank` says that the problem is what the status says.
  const body = { type: 'about:blank', title: titles[status] ?? 'Error', status, detail, ...more };
  return { body, headers: status === 401 ? { 'WWW-Authenticate': 'Bearer' } : {} };
}

/** The detail is a sentence for a person who sees no fields; `errors` say where. */
function badInput(errors: FieldError[]): ProblemAnswer {
  const messages = new Set(errors.map((error) => error.message));
  return problemOfStatus(422, [...messages].join('; '), { errors });
}

/** What the body parser and the file server throw: a status of the client's doing, and for a body the kind of fault. */
function libraryProblem(error: Error): ProblemAnswer | null {
  if (!('expose' in error) || error.expose !== true || !('status' in error) || typeof error.status !== 'number') return null;
  if (!('type' in error)) return problemOfStatus(404, 'There is no such file');
  if (error.status === 413) return problemOfStatus(413, 'The body is larger than is taken here');
  if (error.status === 415) return problemOfStatus(415, 'The character set or encoding of the body is not supported');
  return badInput([{ path: '', message: 'The body cannot be read as JSON' }]);
}

/** The one table from what was broken to what is answered. Null: it is a fault of the server's own. */
export function problemOf(error: unknown): ProblemAnswer | null {
  if (!(error instanceof Error)) return null;
  const { message } = error;
  if (error instanceof NotSignedInError) return problemOfStatus(401, message);
  if (error instanceof ForbiddenError) return problemOfStatus(403, message);
  if (error instanceof NotFoundError) return problemOfStatus(404, message);
  if (error instanceof RuleError) return problemOfStatus(409, message, { rule: error.rule });
  if (error instanceof BadInputError) return badInput(error.errors);
  if (error instanceof TooManyError) {
    const answer = problemOfStatus(429, message);
    return { ...answer, headers: { 'Retry-After': String(error.retryAfterSeconds) } };
  }
  return libraryProblem(error);
}
