import { chmodSync, statSync } from 'node:fs';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openWritingConnection, query } from '../../../server/db/open.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';

let opened: TestCore;

beforeEach(async () => {
  opened = await openTestCore(manualClock());
});

afterEach(() => opened.close());

const site = (id: string) => query.insertInto('site').values({ id, name: id, timeZone: 'UTC', createdAtMs: 0 });
const siteIds = async () => (await opened.core.reader.selectFrom('site').select('id').orderBy('id').execute()).map((row) => row.id);

describe('the writer', () => {
  it('makes a committed unit visible to the reader', async () => {
    await opened.core.writer.commit((tx) => tx.run(site('a')));
    expect(await siteIds()).toEqual(['a']);
  });

  it('rolls back only the unit that throws, and rejects only its promise', async () => {
    const good = opened.core.writer.commit((tx) => tx.run(site('a')));
    const bad = opened.core.writer.commit((tx) => {
      tx.run(site('b'));
      throw new Error('no');
    });
    const alsoGood = opened.core.writer.commit((tx) => tx.run(site('c')));
    await expect(bad).rejects.toThrow('no');
    await good;
    await alsoGood;
    expect(await siteIds()).toEqual(['a', 'c']);
  });

  it('refuses a unit that returns a promise', async () => {
    const unit = opened.core.writer.commit((tx) => Promise.resolve(tx.run(site('a'))));
    await expect(unit).rejects.toThrow(TypeError);
    expect(await siteIds()).toEqual([]);
  });

  it('commits what is queued before it closes, and refuses what comes later', async () => {
    const queued = opened.core.writer.commit((tx) => tx.run(site('a')));
    await opened.core.writer.close();
    await queued;
    await expect(opened.core.writer.commit(() => 1)).rejects.toThrow('closed');
    expect(await siteIds()).toEqual(['a']);
  });

  it('tells its listeners once a group is on disk', async () => {
    let told = 0;
    opened.core.writer.onCommitted(() => told++);
    await Promise.all([opened.core.writer.commit((tx) => tx.run(site('a'))), opened.core.writer.commit((tx) => tx.run(site('b')))]);
    expect(told).toBe(1);
  });
});

describe('the writing connection', () => {
  it('keeps synchronous=FULL after a write and after reopening', async () => {
    await opened.core.writer.commit((tx) => tx.run(site('a')));
    const again = openWritingConnection(opened.core.databaseFile);
    try {
      again.prepare('update site set name = ?').run('b');
      expect(again.pragma('synchronous', { simple: true })).toBe(2);
    } finally {
      again.close();
    }
  });

  it('leaves the database and what stands beside it to their owner, also where they were open to all', async () => {
    await opened.core.writer.commit((tx) => tx.run(site('a')));
    const { databaseFile } = opened.core;
    const modes = () => ['', '-wal', '-shm'].map((end) => (statSync(databaseFile + end).mode & 0o777).toString(8));
    expect(modes()).toEqual(['600', '600', '600']);
    for (const end of ['', '-wal', '-shm']) chmodSync(databaseFile + end, 0o644);
    openWritingConnection(databaseFile).close();
    expect(modes()).toEqual(['600', '600', '600']);
  });
});
