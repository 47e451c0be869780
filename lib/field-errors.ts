import { problemFrom } from './api-problem.ts';

/** The server's word on one field of a form; null when it has none. */
export function fieldError(error: unknown, path: string): string | null {
  if (error === null || error === undefined) return null;
  const problem = problemFrom(error);
  if (problem.kind !== 'bad-input') return null;
  return problem.errors.find((one) => one.path === path || one.path === `body.${path}`)?.message ?? null;
}

/** Whether the problem is said under fields, so that it need not be said above them. */
export function isSaidAtFields(error: unknown): boolean {
  const problem = problemFrom(error);
  return problem.kind === 'bad-input' && problem.errors.length > 0;
}
