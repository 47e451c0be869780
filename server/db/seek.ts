import { type RawBuilder, sql } from 'kysely';

/** The place of a row in a list: what it is sorted by, then its id, which makes the order total. */
export interface Position {
  key: number;
  id: string;
}

/** One page of a list that runs from the newest to the oldest. */
export interface PageRequest {
  limit: number;
  /** The last row of the page before; null for the first page. */
  after: Position | null;
}

/** The rows that come after `position` in the order `key desc, id desc`. A row value, so that an index on `key` serves it. */
export function comesAfter(key: string, id: string, position: Position): RawBuilder<boolean> {
  return sql<boolean>`(${sql.ref(key)}, ${sql.ref(id)}) < (${position.key}, ${position.id})`;
}
