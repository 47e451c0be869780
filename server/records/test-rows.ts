import { type Test, testQuantitySchema } from '#shared/contract/records.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { testUnits } from '#shared/units/nutrient-units.ts';
import { z } from 'zod';
import { query } from '../db/open.ts';
import { writtenBy } from './written-by.ts';

/** Tests with the name of who wrote them down, deleted ones included. */
export function testRows() {
  return query.selectFrom('test').leftJoin('user', 'user.id', 'test.actorId').selectAll('test').select(writtenBy);
}

export type TestRow = ReturnType<typeof testRows> extends { execute(): Promise<(infer Found)[]> } ? Found : never;

const unitSchema = z.enum(testUnits);

export function testOf(row: TestRow): Test {
  return {
    id: row.id,
    systemId: row.systemId,
    at: isoOf(row.atMs),
    quantity: testQuantitySchema.parse(row.quantity),
    value: row.value,
    unit: unitSchema.parse(row.unit),
    below: row.qualifier === '<',
    canonicalMgPerL: row.canonicalMgPerL,
    note: row.note,
    by: row.by,
    byId: row.actorId,
    edited: row.updatedAtMs > row.createdAtMs,
  };
}
