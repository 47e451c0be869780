/**
 * UTC milliseconds as RFC 3339.
 * @example isoOf(0) // '1970-01-01T00:00:00.000Z'
 */
export function isoOf(atMs: number): string {
  return new Date(atMs).toISOString();
}

/** The same for a moment that may not have come. */
export function isoOrNull(atMs: number | null): string | null {
  return atMs === null ? null : isoOf(atMs);
}
