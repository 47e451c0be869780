import type { PageQuery } from '#shared/contract/fields.ts';
import type { PageRequest, Position } from '../db/seek.ts';
import { BadInputError } from '../errors.ts';

/** An answer of the contract's list shape. */
export interface Page<Item> {
  items: Item[];
  next: string | null;
}

/** Opaque to clients: a position as base64url, so that a page begins where the one before ended whatever came in between. */
function encodeCursor(position: Position): string {
  return Buffer.from(JSON.stringify([position.key, position.id])).toString('base64url');
}

function decodeCursor(cursor: string): Position | null {
  try {
    const decoded: unknown = JSON.parse(Buffer.from(cursor, 'base64url').toString('utf8'));
    if (!Array.isArray(decoded) || decoded.length !== 2) return null;
    const [key, id] = decoded as [unknown, unknown];
    return typeof key === 'number' && Number.isFinite(key) && typeof id === 'string' ? { key, id } : null;
  } catch (error) {
    if (error instanceof SyntaxError) return null;
    throw error;
  }
}

/**
 * What a service is asked for: one row more than the page holds, so that it shows whether another page follows.
 * @throws {BadInputError} when the cursor is none of ours.
 */
export function pageRequest(query: PageQuery): PageRequest {
  if (query.cursor === undefined) return { limit: query.limit + 1, after: null };
  const after = decodeCursor(query.cursor);
  if (after === null) throw new BadInputError([{ path: 'cursor', message: 'Give the `next` of the page before, unchanged' }]);
  return { limit: query.limit + 1, after };
}

/** Makes the answer from the rows that {@link pageRequest} asked for. */
export function pageFrom<Row, Item>(
  rows: readonly Row[],
  query: PageQuery,
  positionOf: (row: Row) => Position,
  itemOf: (row: Row) => Item,
): Page<Item> {
  const shown = rows.slice(0, query.limit);
  const last = shown.at(-1);
  const next = rows.length > query.limit && last !== undefined ? encodeCursor(positionOf(last)) : null;
  return { items: shown.map(itemOf), next };
}

/** A list that is short by nature and comes whole. */
export function wholePage<Item>(items: Item[]): Page<Item> {
  return { items, next: null };
}
