import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import SqliteConnection from 'better-sqlite3';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { ArchiveError, backUp, restore } from '../../scripts/backup/archive.ts';
import { query } from '../../server/db/open.ts';
import { manualClock, openTestCore, type TestCore } from '../helpers/core.ts';

let opened: TestCore;
let elsewhere: string;

beforeEach(async () => {
  opened = await openTestCore(manualClock());
  elsewhere = mkdtempSync(path.join(tmpdir(), 'steadfall-backup-'));
});

afterEach(async () => {
  await opened.close();
  rmSync(elsewhere, { recursive: true, force: true });
});

const addSite = (id: string) =>
  opened.core.writer.commit((tx) => tx.run(query.insertInto('site').values({ id, name: id, timeZone: 'UTC', createdAtMs: 0 })));

describe('backup and restore', () => {
  it('brings back the database and the files beside it, taken while the server writes', async () => {
    writeFileSync(path.join(opened.folder, 'jwt-secret'), 'key');
    await addSite('a');
    const tar = path.join(elsewhere, 'backup.tar');
    const writes = Array.from({ length: 50 }, (_, index) => addSite(`later-${index}`));
    backUp(opened.folder, tar);
    await Promise.all(writes);

    const restored = path.join(elsewhere, 'restored');
    restore(restored, tar);
    expect(existsSync(path.join(restored, 'jwt-secret'))).toBe(true);
    const connection = new SqliteConnection(path.join(restored, 'steadfall.db'), { readonly: true });
    const ids = connection.prepare("select id from site where id = 'a'").all();
    connection.close();
    expect(ids).toEqual([{ id: 'a' }]);
  });

  it('refuses to restore over what is there', () => {
    const tar = path.join(elsewhere, 'backup.tar');
    backUp(opened.folder, tar);
    expect(() => restore(opened.folder, tar)).toThrow(ArchiveError);
  });

  it('says so when there is nothing to back up, and leaves no file', () => {
    const tar = path.join(elsewhere, 'backup.tar');
    expect(() => backUp(elsewhere, tar)).toThrow('DATA_DIR');
    expect(existsSync(tar)).toBe(false);
  });
});
