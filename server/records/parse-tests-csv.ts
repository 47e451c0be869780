import Papa from 'papaparse';
import { type TestQuantity, testQuantitySchema } from '#shared/contract/records.ts';
import { idSchema, timestampSchema } from '#shared/contract/fields.ts';
import { testUnits, unitsFor } from '#shared/units/nutrient-units.ts';
import { BadInputError } from '../errors.ts';
import type { WrittenTest } from './read-test.ts';

export const MAX_ROWS = 10_000;
const MAX_NOTE_LENGTH = 2000;
const MAX_FIELD_LENGTH = 120;

const columns = ['id', 'system', 'at', 'quantity', 'qualifier', 'value', 'unit', 'kit', 'note'] as const;
const neededColumns = ['at', 'quantity', 'value', 'unit'] as const;
type Column = (typeof columns)[number];
type Fields = Record<Column, string>;

/** One row of the file, with what it says or why it cannot be read. */
export interface CsvRow {
  /** Counted as a spreadsheet counts: the header is 1. */
  line: number;
  fields: Fields;
  parsed: { id: string | undefined; system: string; test: WrittenTest } | { why: string };
}

const refuseFile = (message: string) => new BadInputError([{ path: 'file', message }]);

function decode(file: Uint8Array): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(file);
  } catch (error) {
    if (error instanceof TypeError) throw refuseFile('The file is not UTF-8 text; save it as CSV in UTF-8');
    throw error;
  }
}

/** A spreadsheet in a country that writes 0,05 separates its columns by semicolons. */
function delimiterOf(text: string): ',' | ';' | '\t' {
  const header = text.slice(0, text.search(/[\r\n]|$/));
  if (header.includes('\t')) return '\t';
  return header.includes(';') ? ';' : ',';
}

/** A number as written; null for what is none. A decimal comma is one only where the comma separates no columns. */
function numberOf(written: string, delimiter: string): number | null {
  const text = delimiter === ',' ? written : written.replace(',', '.');
  return /^\d{1,9}(\.\d{1,12})?$/.test(text) ? Number(text) : null;
}

function quantityOf(written: string): TestQuantity | null {
  const found = testQuantitySchema.safeParse(written.toLowerCase());
  return found.success ? found.data : null;
}

function parseFields(fields: Fields, delimiter: string): CsvRow['parsed'] {
  const tooLong = columns.find((column) => fields[column].length > (column === 'note' ? MAX_NOTE_LENGTH : MAX_FIELD_LENGTH));
  if (tooLong !== undefined) return { why: `${tooLong} is too long` };
  if (fields.id !== '' && !idSchema.safeParse(fields.id).success) return { why: 'id must be a UUID, or empty' };
  if (!timestampSchema.safeParse(fields.at).success) return { why: 'at must be a time with its offset, such as 2026-03-01T18:30:00+01:00' };
  const quantity = quantityOf(fields.quantity);
  if (quantity === null) return { why: `quantity must be one of ${testQuantitySchema.options.join(', ')}` };
  const unit = testUnits.find((known) => known.toLowerCase() === fields.unit.toLowerCase());
  if (unit === undefined) return { why: `unit must say of what: ${unitsFor(quantity).join(' or ')}` };

  const isCensored = fields.value.startsWith('<');
  const qualifier = fields.qualifier === '' && isCensored ? '<' : fields.qualifier;
  if (qualifier !== '' && qualifier !== '=' && qualifier !== '<') return { why: 'qualifier must be <, = or empty' };
  const value = numberOf(isCensored ? fields.value.slice(1).trim() : fields.value, delimiter);
  if (value === null || (isCensored && qualifier === '=')) return { why: 'value must be a number, such as 0.05' };

  const note = [fields.note, fields.kit === '' ? '' : `Kit: ${fields.kit}`].filter((part) => part !== '').join(' · ');
  if (note.length > MAX_NOTE_LENGTH) return { why: 'note and kit together are too long' };
  return {
    id: fields.id === '' ? undefined : fields.id.toLowerCase(),
    system: fields.system,
    test: { at: fields.at, quantity, value, unit, below: qualifier === '<', note },
  };
}

/**
 * Reads a file of tests: `id,system,at,quantity,qualifier,value,unit,kit,note` in any order, of which id, system,
 * qualifier, kit and note may be missing. Separators are commas, semicolons or tabs, as the header has them.
 * @throws {BadInputError} at `file` when it is no such file at all.
 */
export function parseTestsCsv(file: Uint8Array): CsvRow[] {
  const text = decode(file);
  const delimiter = delimiterOf(text);
  const { data, errors } = Papa.parse<string[]>(text, { delimiter });
  const broken = errors.find((error) => error.type === 'Quotes');
  if (broken !== undefined) throw refuseFile(`Row ${(broken.row ?? 0) + 1} has a quote that is not closed`);

  const [header, ...records] = data;
  const names = (header ?? []).map((name) => name.trim().toLowerCase());
  const missing = neededColumns.filter((column) => !names.includes(column));
  if (missing.length > 0) throw refuseFile(`The first row must name the columns; missing: ${missing.join(', ')}`);
  const twice = columns.find((column) => names.indexOf(column) !== names.lastIndexOf(column));
  if (twice !== undefined) throw refuseFile(`The first row names ${twice} twice`);

  const rows = records
    .map((record, index) => ({ record, line: index + 2 }))
    .filter(({ record }) => record.some((field) => field.trim() !== ''));
  if (rows.length > MAX_ROWS) throw refuseFile(`The file has ${rows.length} rows; import at most ${MAX_ROWS} at a time`);

  return rows.map(({ record, line }) => {
    const field = (column: Column) => (names.includes(column) ? (record[names.indexOf(column)] ?? '').trim() : '');
    const fields = Object.fromEntries(columns.map((column) => [column, field(column)])) as Fields;
    // An unquoted decimal comma in a file separated by commas shifts everything after it: such a row says something else.
    const parsed = record.length > names.length ? { why: 'It has more columns than the first row' } : parseFields(fields, delimiter);
    return { line, fields, parsed };
  });
}
