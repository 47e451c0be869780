import type { Request } from 'express';
import { NotSignedInError } from '../errors.ts';

/** The access token of the `Authorization` header. @throws {NotSignedInError} when there is none. */
export function bearerOf(request: Request): string {
  const [scheme, token, ...more] = (request.headers.authorization ?? '').split(' ');
  if (scheme?.toLowerCase() !== 'bearer' || token === undefined || more.length > 0) {
    throw new NotSignedInError('Sign in, and send the access token as a bearer token');
  }
  return token;
}
