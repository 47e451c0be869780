import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { recordChange } from '../../../server/changes/record-change.ts';
import { type ChangeLog, openChangeLog } from '../../../server/live/change-log.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addSiteRow, addSystemRow } from '../../helpers/rows.ts';

let opened: TestCore;
let log: ChangeLog;
let systemIds: string[];

beforeEach(async () => {
  opened = await openTestCore(manualClock());
  log = openChangeLog(opened.core.databaseFile);
  const siteId = await addSiteRow(opened.core);
  systemIds = [await addSystemRow(opened.core, siteId), await addSystemRow(opened.core, siteId), await addSystemRow(opened.core, siteId)];
  await opened.core.writer.commit((tx) => {
    for (let round = 0; round < 3; round++) {
      for (const systemId of systemIds) recordChange(tx, { systemId, type: 'plan', atMs: 0, data: { reason: `round ${round}` } });
    }
  });
});

afterEach(async () => {
  log.close();
  await opened.close();
});

const placesOf = (changes: { systemId: string }[]) => changes.map((change) => systemIds.indexOf(change.systemId));

describe('the change log', () => {
  it('gives what some systems did, in order and up to a limit', () => {
    const wanted = systemIds.slice(0, 2);
    const all = log.ofSystemsAfter(wanted, 0, 100);
    expect(placesOf(all)).toEqual([0, 1, 0, 1, 0, 1]);
    expect(all).toEqual(log.after(0, 100).filter((change) => wanted.includes(change.systemId)));
    expect(log.ofSystemsAfter(wanted, all[2]?.seq ?? 0, 2)).toEqual(all.slice(3, 5));
    expect(log.ofSystemsAfter([], 0, 100)).toEqual([]);
  });
});
