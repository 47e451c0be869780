import type { Compilable } from 'kysely';
import type { Reader } from './open.ts';

/** Runs on the reading connection what a unit of work could run as well, so that a query is written once. */
export async function readRows<Row>(reader: Reader, statement: Compilable<Row>): Promise<Row[]> {
  const { rows } = await reader.executeQuery(statement.compile());
  return rows;
}
