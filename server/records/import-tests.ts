import type { z } from 'zod';
import type { importRowSchema } from '#shared/contract/records.ts';
import { recordAudit } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { NotFoundError } from '../errors.ts';
import { claimId } from '../requests/claim-id.ts';
import { systemOfSite } from '../systems/system-rows.ts';
import { type CsvRow, parseTestsCsv } from './parse-tests-csv.ts';
import { readTest, type ReadTest } from './read-test.ts';
import { insertTest, testById } from './store-test.ts';

export interface ImportInput {
  siteId: string;
  systemId: string;
  userId: string;
  file: Uint8Array;
  isDryRun: boolean;
}

export type ImportedRow = z.infer<typeof importRowSchema>;

export interface ImportReport {
  rows: ImportedRow[];
  added: number;
  refused: number;
}

/** Rows of one unit of work: few enough that devices wait no longer for their acknowledgement than for a busy moment. */
const ROWS_A_UNIT = 50;

type Fate = { fate: 'new'; test: ReadTest } | { fate: 'same' } | { fate: 'refused'; why: string };

const refused = (why: string): Fate => ({ fate: 'refused', why });

/** Two results are one when they are of the same moment and say the same, in whatever unit. */
const keyOf = (test: { quantity: string; atMs: number; qualifier: string; canonicalMgPerL: number }) =>
  [test.quantity, test.atMs, test.qualifier, test.canonicalMgPerL.toPrecision(9)].join(' ');

type ImportSystem = Pick<Row<'system'>, 'id' | 'name'>;

/** What earlier rows of the file bring, which a dry run does not find in the table. */
interface Earlier {
  keys: Set<string>;
  ids: Set<string>;
}

function fateById(tx: Transaction, systemId: string, id: string, test: ReadTest): Fate | null {
  const idTaken = refused('This id is already in use with other content');
  const existing = testById(tx, id);
  if (existing === undefined) {
    return tx.first(query.selectFrom('claimedId').where('id', '=', id).select('id')) === undefined ? null : idTaken;
  }
  if (existing.systemId !== systemId) return idTaken;
  if (existing.deletedAtMs !== null) return refused('This test was deleted; remove its id to import it as a new one');
  return keyOf(existing) === keyOf(test) ? { fate: 'same' } : idTaken;
}

function fateOf(tx: Transaction, system: ImportSystem, row: CsvRow, earlier: Earlier, nowMs: number): Fate {
  const { parsed } = row;
  if ('why' in parsed) return refused(parsed.why);
  if (parsed.system !== '' && parsed.system !== system.id && parsed.system !== system.name) {
    return refused(`It is of the system "${parsed.system}"; this import is for "${system.name}"`);
  }
  const test = readTest(parsed.test, nowMs);
  if ('errors' in test) return refused(test.errors.map((error) => error.message).join('; '));
  const { id } = parsed;
  const key = keyOf(test);
  const byId = id === undefined ? null : fateById(tx, system.id, id, test);
  if (byId !== null) return byId;
  if (earlier.keys.has(key)) return { fate: 'same' };
  if (id !== undefined && earlier.ids.has(id)) return refused('An earlier row has this id with other content');
  const atThatMoment = tx.all(
    query
      .selectFrom('test')
      .where('systemId', '=', system.id)
      .where('atMs', '=', test.atMs)
      .where('quantity', '=', test.quantity)
      .where('deletedAtMs', 'is', null)
      .select(['quantity', 'atMs', 'qualifier', 'canonicalMgPerL']),
  );
  return atThatMoment.some((other) => keyOf(other) === key) ? { fate: 'same' } : { fate: 'new', test };
}

/**
 * Takes tests from a file, each row for itself: what is there already stays, what cannot be is refused, the rest is
 * added. Importing the same file again adds nothing, so that one that broke off is simply sent again.
 */
export async function importTests(core: Core, input: ImportInput): Promise<ImportReport> {
  const { siteId, systemId, userId, isDryRun } = input;
  const [system] = await readRows(core.reader, systemOfSite(siteId, systemId));
  if (system === undefined) throw new NotFoundError('There is no such system in your sites');
  const rows = parseTestsCsv(input.file);
  const earlier: Earlier = { keys: new Set(), ids: new Set() };
  const report: ImportedRow[] = [];

  function take(tx: Transaction, toSystem: ImportSystem, row: CsvRow): void {
    const nowMs = core.clock.nowMs();
    const fate = fateOf(tx, toSystem, row, earlier, nowMs);
    const { quantity, at, value, unit } = row.fields;
    report.push({ line: row.line, fate: fate.fate, why: fate.fate === 'refused' ? fate.why : null, quantity, at, value, unit });
    if (fate.fate !== 'new' || 'why' in row.parsed) return;
    earlier.keys.add(keyOf(fate.test));
    if (row.parsed.id !== undefined) earlier.ids.add(row.parsed.id);
    if (isDryRun) return;
    const { id } = claimId(tx, { siteId, kind: `test:${systemId}`, id: row.parsed.id, body: row.parsed.test, nowMs });
    insertTest(tx, { siteId, systemId, userId, nowMs, id }, fate.test);
  }

  for (let first = 0; first < rows.length; first += ROWS_A_UNIT) {
    await core.writer.commit((tx) => rows.slice(first, first + ROWS_A_UNIT).forEach((row) => take(tx, system, row)));
  }

  const count = (fate: ImportedRow['fate']) => report.filter((row) => row.fate === fate).length;
  const added = count('new');
  if (!isDryRun && added > 0) {
    await core.writer.commit((tx) =>
      recordAudit(tx, {
        atMs: core.clock.nowMs(),
        siteId,
        actor: { kind: 'user', id: userId },
        action: 'import',
        entity: 'test',
        entityId: systemId,
        after: { added },
      }),
    );
  }
  return { rows: report, added, refused: count('refused') };
}
