import { recordAudit } from '../audit/record-audit.ts';
import { recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import type { ReadTest } from './read-test.ts';
import { testOf, type TestRow, testRows } from './test-rows.ts';

/** Who does it, and when. */
export interface Writing {
  siteId: string;
  userId: string;
  nowMs: number;
}

export function testById(tx: Transaction, id: string): TestRow | undefined {
  return tx.first(testRows().where('test.id', '=', id));
}

export function insertTest(tx: Transaction, writing: Writing & { id: string; systemId: string }, test: ReadTest): TestRow {
  const { id, siteId, systemId, userId, nowMs } = writing;
  tx.run(
    query.insertInto('test').values({
      id,
      siteId,
      systemId,
      ...test,
      actorId: userId,
      createdAtMs: nowMs,
      updatedAtMs: nowMs,
      deletedAtMs: null,
    }),
  );
  const row = testById(tx, id);
  if (row === undefined) throw new Error(`Test ${id} was inserted and is not there`);
  recordChange(tx, { systemId, type: 'test', atMs: nowMs, data: testOf(row) });
  return row;
}

type Change = Partial<ReadTest> & { deletedAtMs?: number | null };

/** Changes a test and keeps what it was. */
export function changeTest(
  tx: Transaction,
  writing: Writing & { action: 'update' | 'delete' | 'restore' },
  before: TestRow,
  change: Change,
): TestRow {
  const { siteId, userId, nowMs, action } = writing;
  const isCorrected = (Object.keys(change) as (keyof Change)[]).some((key) => key !== 'deletedAtMs' && change[key] !== before[key]);
  // Later than its creation even within the same millisecond: that is how a corrected test is told.
  const updatedAtMs = isCorrected ? Math.max(nowMs, before.createdAtMs + 1) : before.updatedAtMs;
  tx.run(
    query
      .updateTable('test')
      .set({ ...change, updatedAtMs })
      .where('id', '=', before.id),
  );
  const after = testById(tx, before.id);
  if (after === undefined) throw new Error(`Test ${before.id} was changed and is not there`);
  const revision = { before: JSON.stringify(before), after: JSON.stringify(after) };
  tx.run(query.insertInto('testRevision').values({ testId: before.id, siteId, atMs: nowMs, actorId: userId, ...revision }));
  recordAudit(tx, {
    atMs: nowMs,
    siteId,
    actor: { kind: 'user', id: userId },
    action,
    entity: 'test',
    entityId: before.id,
    before: testOf(before),
    after: action === 'delete' ? undefined : testOf(after),
  });
  const data = action === 'delete' ? { ...testOf(after), deleted: true } : testOf(after);
  recordChange(tx, { systemId: before.systemId, type: 'test', atMs: nowMs, data });
  return after;
}
