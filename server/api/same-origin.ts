import type { Request } from 'express';
import { isOwnOrigin } from '../access/own-origin.ts';
import { ForbiddenError } from '../errors.ts';

/**
 * Refuses what another site's page started. Browsers say so in `Sec-Fetch-Site`, older ones in `Origin`;
 * a client that sends neither is no browser and carries nobody's cookies by accident.
 * @throws {ForbiddenError}
 */
export function requireSameOrigin(request: Request, publicUrl: string | undefined): void {
  const site = request.headers['sec-fetch-site'];
  if (site !== undefined) {
    if (site !== 'same-origin') throw new ForbiddenError('This is answered to pages of the app itself only');
    return;
  }
  const { origin } = request.headers;
  if (origin !== undefined && !isOwnOrigin(origin, request.headers.host, publicUrl)) {
    throw new ForbiddenError('This is answered to pages of the app itself only');
  }
}
