/** Rules that were broken, without HTTP in them; `api/problem.ts` maps each class to a status. */

export class NotFoundError extends Error {}

export class NotSignedInError extends Error {}

export class ForbiddenError extends Error {}

/** A rule of the product, or the state of things, forbids it. `rule` is a stable code, the message says what to do. */
export class RuleError extends Error {
  readonly rule: string;
  constructor(rule: string, message: string) {
    super(message);
    this.rule = rule;
  }
}

export interface FieldError {
  path: string;
  message: string;
}

/** Input that has the right shape and still cannot be. */
export class BadInputError extends Error {
  readonly errors: FieldError[];
  constructor(errors: FieldError[]) {
    super(errors.map((error) => `${error.path}: ${error.message}`).join('; '));
    this.errors = errors;
  }
}

export class TooManyError extends Error {
  readonly retryAfterSeconds: number;
  constructor(message: string, retryAfterSeconds: number) {
    super(message);
    this.retryAfterSeconds = retryAfterSeconds;
  }
}
