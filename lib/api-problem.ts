import { problemSchema } from '#shared/contract/problem.ts';

/** What can come instead of an answer. `detail` is the server's own sentence, which says what to do. */
export type ApiProblem =
  | { kind: 'unreachable' }
  | { kind: 'signed-out'; detail: string }
  | { kind: 'forbidden'; detail: string }
  | { kind: 'not-found'; detail: string }
  | { kind: 'conflict'; detail: string }
  | { kind: 'bad-input'; detail: string; errors: { path: string; message: string }[] }
  | { kind: 'too-many'; detail: string }
  | { kind: 'server'; detail: string }
  | { kind: 'unexpected'; detail: string };

/** Thrown by `call`; the only error that the API client throws, besides an abort. */
export class ApiError extends Error {
  readonly problem: ApiProblem;
  constructor(problem: ApiProblem) {
    super(problemSentence(problem));
    this.name = 'ApiError';
    this.problem = problem;
  }
}

/** Reads an answer that is not a success. */
export function problemOf(status: number, body: unknown): ApiProblem {
  const parsed = problemSchema.safeParse(body);
  const detail = parsed.success ? parsed.data.detail : '';
  const errors = parsed.success ? (parsed.data.errors ?? []) : [];
  if (status === 401) return { kind: 'signed-out', detail };
  if (status === 403) return { kind: 'forbidden', detail };
  if (status === 404) return { kind: 'not-found', detail };
  if (status === 409) return { kind: 'conflict', detail };
  if (status === 400 || status === 413 || status === 415 || status === 422) return { kind: 'bad-input', detail, errors };
  if (status === 429) return { kind: 'too-many', detail };
  return { kind: 'server', detail };
}

/** One sentence for a person: what happened, and what to do. */
export function problemSentence(problem: ApiProblem): string {
  switch (problem.kind) {
    case 'unreachable':
      return 'No connection to Steadfall. Check the network, then try again.';
    case 'signed-out':
      return problem.detail || 'You are signed out. Sign in again.';
    case 'forbidden':
      return problem.detail || 'Your role in this site does not allow this.';
    case 'not-found':
      return problem.detail || 'This is not here, or not yours to see.';
    case 'conflict':
      return problem.detail || 'Something changed meanwhile. Look again, then retry.';
    case 'bad-input':
      return problem.detail || problem.errors[0]?.message || 'Something in the form does not fit.';
    case 'too-many':
      return problem.detail || 'Too many tries. Wait a minute, then try again.';
    case 'server':
      return problem.detail || 'Steadfall could not do this just now. Try again in a moment.';
    case 'unexpected':
      return 'Steadfall answered in a way that this page does not know. Reload the page.';
  }
}

/** The problem of anything caught: what is not from the API is shown as unexpected rather than hidden. */
export function problemFrom(error: unknown): ApiProblem {
  if (error instanceof ApiError) return error.problem;
  return { kind: 'unexpected', detail: error instanceof Error ? error.message : String(error) };
}
