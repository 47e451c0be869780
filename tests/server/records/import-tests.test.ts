import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { BadInputError } from '../../../server/errors.ts';
import { createTests } from '../../../server/records/create-tests.ts';
import { importTests } from '../../../server/records/import-tests.ts';
import { testOf } from '../../../server/records/test-rows.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addPlace, addSiteRow, addSystemRow } from '../../helpers/rows.ts';

const HEADER = 'id,system,at,quantity,qualifier,value,unit,kit,note';
let opened: TestCore;
let place: { siteId: string; systemId: string; userId: string };

beforeEach(async () => {
  opened = await openTestCore(manualClock());
  place = await addPlace(opened.core);
});

afterEach(() => opened.close());

const run = (lines: string[] | Uint8Array, isDryRun = false) =>
  importTests(opened.core, { ...place, isDryRun, file: lines instanceof Uint8Array ? lines : Buffer.from(lines.join('\r\n')) });
const stored = async () => {
  const rows = await createTests(opened.core).page(place.systemId, {}, { limit: 20_000, after: null });
  return rows.map(testOf).reverse();
};
const fates = async (lines: string[], isDryRun = false) => (await run(lines, isDryRun)).rows.map((row) => row.fate);
const whyOf = async (row: string) => {
  const report = await run([HEADER, row]);
  expect(report).toMatchObject({ added: 0, refused: 1 });
  expect(await stored()).toEqual([]);
  return report.rows[0]?.why;
};

const notebook = [
  HEADER,
  ',,2026-01-05T19:00:00+01:00,nitrate,,25,mg/L NO3,Drop kit,before water change',
  ',Front window,2026-01-05T18:05:00Z,phosphate,<,0.02,mg/L PO4,,',
  '',
  ',,2026-01-12T18:00:00Z,alkalinity,=,7.8,dKH,,"calm, and ""clear"""',
];

describe('importing tests', () => {
  it('adds every row, with its time, censoring and kit, and tells the live stream', async () => {
    expect(await run(notebook)).toMatchObject({ added: 3, refused: 0, rows: [{ line: 2 }, { line: 3 }, { line: 5 }] });
    const [nitrate, phosphate, alkalinity] = await stored();
    expect(nitrate).toMatchObject({
      at: '2026-01-05T18:00:00.000Z',
      value: 25,
      note: 'before water change · Kit: Drop kit',
      byId: place.userId,
    });
    expect(phosphate).toMatchObject({ below: true, value: 0.02, unit: 'mg/L PO4' });
    expect(alkalinity).toMatchObject({ note: 'calm, and "clear"', unit: 'dKH' });
    expect(alkalinity?.canonicalMgPerL).toBeCloseTo(7.8 * 17.848, 2);
    expect(await opened.core.reader.selectFrom('change').selectAll().execute()).toHaveLength(3);
    const audit = await opened.core.reader.selectFrom('audit').select(['action', 'after']).execute();
    expect(audit).toEqual([{ action: 'import', after: '{"added":3}' }]);
  });

  it('only tells the fates on a dry run', async () => {
    const lines = [...notebook, ',,2026-01-12T18:00:00Z,nitrate,,abc,mg/L NO3,,'];
    expect(await run(lines, true)).toMatchObject({ added: 3, refused: 1 });
    expect(await stored()).toEqual([]);
    expect(await opened.core.reader.selectFrom('claimedId').selectAll().execute()).toEqual([]);
    expect(await run(lines)).toMatchObject({ added: 3, refused: 1 });
  });

  it('adds nothing when the same file comes again', async () => {
    await run(notebook);
    expect(await run(notebook)).toMatchObject({ added: 0, refused: 0, rows: [{ fate: 'same' }, { fate: 'same' }, { fate: 'same' }] });
    expect(await stored()).toHaveLength(3);
  });

  it('knows a result again in another unit, and twice in one file', async () => {
    const lines = [HEADER, ',,2026-01-05T18:00:00Z,phosphate,,0.03,mg/L PO4,,', ',,2026-01-05T18:00:00Z,phosphate,,30,ug/L PO4,,'];
    expect(await fates(lines, true)).toEqual(['new', 'same']);
    expect(await fates(lines)).toEqual(['new', 'same']);
    expect(await fates([HEADER, ',,2026-01-05T18:00:00Z,phosphate,<,0.03,mg/L PO4,,'])).toEqual(['new']);
  });

  it('goes by the id where there is one', async () => {
    const id = uuidv7();
    const row = (value: string) => `${id},,2026-01-05T18:00:00Z,nitrate,,${value},mg/L NO3,,`;
    expect(await fates([HEADER, row('25'), row('26')], true)).toEqual(['new', 'refused']);
    expect(await fates([HEADER, row('25')])).toEqual(['new']);
    expect(await fates([HEADER, row('25'), row('26')])).toEqual(['same', 'refused']);
    expect((await stored()).map((test) => test.id)).toEqual([id]);
  });

  it("refuses an id of another site's test and one that was deleted", async () => {
    const tests = createTests(opened.core);
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    const systemId = await addSystemRow(opened.core, siteId);
    const body = { at: '2026-01-05T18:00:00Z', quantity: 'nitrate' as const, value: 25, unit: 'mg/L NO3' as const, below: false, note: '' };
    const foreign = await tests.create({ siteId, systemId, userId: place.userId, role: 'owner', body });
    const own = await tests.create({ ...place, role: 'owner', body });
    await tests.remove({ ...place, role: 'owner', testId: own.value.id });
    const row = (id: string) => `${id},,2026-01-05T18:00:00Z,nitrate,,25,mg/L NO3,,`;
    expect(await whyOf(row(foreign.value.id))).toBe('This id is already in use with other content');
    expect(await whyOf(row(own.value.id))).toContain('deleted');
  });

  it.each([
    ['a nitrate of 5000', ',,2026-01-05T18:00:00Z,nitrate,,5000,mg/L NO3,,', 'slip'],
    ['a time in the future', ',,2026-03-02T18:00:00Z,nitrate,,5,mg/L NO3,,', 'future'],
    ['a time before 1990', ',,1926-03-02T18:00:00Z,nitrate,,5,mg/L NO3,,', '1990'],
    ['a time without an offset', ',,2026-01-05 18:00,nitrate,,5,mg/L NO3,,', 'offset'],
    ['a negative result', ',,2026-01-05T18:00:00Z,nitrate,,-5,mg/L NO3,,', 'number'],
    ['NaN', ',,2026-01-05T18:00:00Z,nitrate,,NaN,mg/L NO3,,', 'number'],
    ['an unknown quantity', ',,2026-01-05T18:00:00Z,silicate,,5,mg/L NO3,,', 'quantity'],
    ['a unit that does not say of what', ',,2026-01-05T18:00:00Z,nitrate,,5,ppm,,', 'mg/L NO3 or mg/L NO3-N'],
    ['a unit of another quantity', ',,2026-01-05T18:00:00Z,nitrate,,5,mg/L PO4,,', 'no unit of nitrate'],
    ['a result above the range of the kit', ',,2026-01-05T18:00:00Z,nitrate,>,100,mg/L NO3,,', 'qualifier'],
    ['a qualifier against its value', ',,2026-01-05T18:00:00Z,nitrate,=,<5,mg/L NO3,,', 'number'],
    ['an id that is none', '17,,2026-01-05T18:00:00Z,nitrate,,5,mg/L NO3,,', 'UUID'],
    ['another system', ',Lobby,2026-01-05T18:00:00Z,nitrate,,5,mg/L NO3,,', 'Lobby'],
    ['an unquoted decimal comma', ',,2026-01-05T18:00:00Z,phosphate,,0,05,mg/L PO4,,', 'more columns'],
    ['a quoted decimal comma in a file of commas', ',,2026-01-05T18:00:00Z,phosphate,,"0,05",mg/L PO4,,', 'number'],
    ['an over-long note', `,,2026-01-05T18:00:00Z,nitrate,,5,mg/L NO3,,${'x'.repeat(2001)}`, 'note is too long'],
    ['an over-long kit', `,,2026-01-05T18:00:00Z,nitrate,,5,mg/L NO3,${'x'.repeat(121)},`, 'kit is too long'],
  ])('refuses a row with %s and says why', async (_, row, why) => {
    expect(await whyOf(row)).toContain(why);
  });

  it('reads a spreadsheet with a byte order mark, semicolons, decimal commas and its own order of columns', async () => {
    const lines = [
      '\uFEFFUnit;Value;Quantity;At',
      'mg/l po4;<0,05;Phosphate;2026-01-05T18:00:00Z',
      'mg/L PO4;0.04;phosphate;2026-01-06T18:00:00Z',
    ];
    expect(await run([lines.join('\n')])).toMatchObject({ added: 2 });
    expect((await stored()).map((test) => [test.value, test.below])).toEqual([
      [0.05, true],
      [0.04, false],
    ]);
  });

  it.each<[string, string[] | Uint8Array]>([
    ['nothing in it', ['']],
    ['a column missing', ['at,quantity,value', '2026-01-05T18:00:00Z,nitrate,5']],
    ['a column named twice', ['at,quantity,value,unit,unit', '']],
    ['a quote that is not closed', [HEADER, ',,2026-01-05T18:00:00Z,nitrate,,5,mg/L NO3,,"open']],
    ['bytes that are no UTF-8', Buffer.from([0xff, 0xfe, 0x61, 0x00])],
    ['more than 10,000 rows', [HEADER, ...Array.from({ length: 10_001 }, () => ',,x,,,,,,')]],
  ])('refuses a whole file with %s', async (_, file) => {
    const refused = run(file);
    await expect(refused).rejects.toThrow(BadInputError);
    await expect(refused).rejects.toMatchObject({ errors: [{ path: 'file' }] });
  });

  it('takes more rows than one unit of work holds', async () => {
    const rows = Array.from(
      { length: 130 },
      (_, index) => `,,${new Date(Date.UTC(2025, 0, 1 + index)).toISOString()},nitrate,,5,mg/L NO3,,`,
    );
    expect(await run([HEADER, ...rows])).toMatchObject({ added: 130, refused: 0 });
    expect(await stored()).toHaveLength(130);
  });
});
