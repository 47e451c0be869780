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
  const decoded = decodeJson(cursor);
  if (!Array.isArray(decoded) || decoded.length !== 2) return null;
  const [key, id] = decoded as [unknown, unknown];
  return typeof key === 'number' && Number.isFinite(key) && typeof id === 'string' ? { key, id } : null;
}

function decodeJson(cursor: string): unknown {
  try {
    return JSON.parse(Buffer.from(cursor, 'base64url').toString('utf8'));
  } catch (error) {
    if (error instanceof SyntaxError) return null;
    throw error;
  }
}

const foreignCursor = () => new BadInputError([{ path: 'cursor', message: 'Give the `next` of the page before, unchanged' }]);

/**
 * What a service is asked for: one row more than the page holds, so that it shows whether another page follows.
 * @throws {BadInputError} when the cursor is none of ours.
 */
export function pageRequest(query: PageQuery): PageRequest {
  if (query.cursor === undefined) return { limit: query.limit + 1, after: null };
  const after = decodeCursor(query.cursor);
  if (after === null) throw foreignCursor();
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

/**
 * A page of a list that is short by nature and was read whole. Its cursor is a place in it: what is added in front in
 * between shows an item twice rather than hiding one.
 * @throws {BadInputError} when the cursor is none of ours.
 */
export function pageOfWhole<Item>(items: readonly Item[], query: PageQuery): Page<Item> {
  const from = query.cursor === undefined ? 0 : decodePlace(query.cursor);
  if (from === null) throw foreignCursor();
  const to = from + query.limit;
  return { items: items.slice(from, to), next: to < items.length ? Buffer.from(JSON.stringify([to])).toString('base64url') : null };
}

function decodePlace(cursor: string): number | null {
  const decoded = decodeJson(cursor);
  if (!Array.isArray(decoded) || decoded.length !== 1) return null;
  const [place] = decoded as [unknown];
  return typeof place === 'number' && Number.isSafeInteger(place) && place >= 0 ? place : null;
}
