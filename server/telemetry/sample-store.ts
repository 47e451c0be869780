import type { Transaction } from '../db/writer.ts';
import { addToRollups } from './rollups.ts';

export interface NewSample {
  tMs: number;
  value: number;
}

export interface Appended {
  /** What was not there before, in the order given. */
  stored: NewSample[];
  /** How many came again with another value; the first stays. */
  conflicts: number;
}

/** Where samples live. An interface of its own, since this is the path that carries the load. */
export interface SampleStore {
  /** Stores samples of one series, given in chronological order, and corrects its roll-ups, within the unit of work. */
  append(tx: Transaction, seriesKey: number, samples: readonly NewSample[], receivedMs: number, nowMs: number): Appended;
}

/** Conflicts that are kept to be looked at, per series. Their number is counted without bound. */
const CONFLICTS_KEPT = 200;

const insertSql = 'insert into sample (seriesKey, tMs, value, lagMs) values (?, ?, ?, ?) on conflict do nothing';
const keptSql = 'select value from sample where seriesKey = ? and tMs = ?';
const conflictSql = 'insert into sampleConflict (seriesKey, tMs, keptValue, otherValue, receivedMs) values (?, ?, ?, ?, ?)';
const pruneSql = `delete from sampleConflict where seriesKey = ? and seq <=
  (select seq from sampleConflict where seriesKey = ? order by seq desc limit 1 offset ${CONFLICTS_KEPT})`;

/** Samples in SQLite: one row each by (series, time), written by statements that are prepared once. */
export const sqliteSampleStore: SampleStore = {
  append(tx, seriesKey, samples, receivedMs, nowMs) {
    const insert = tx.prepare(insertSql);
    const stored: NewSample[] = [];
    let conflicts = 0;
    for (const sample of samples) {
      const { tMs, value } = sample;
      if (insert.run(seriesKey, tMs, value, receivedMs - tMs).changes > 0) {
        stored.push(sample);
        continue;
      }
      const kept = tx.prepare(keptSql).get(seriesKey, tMs) as { value: number };
      if (kept.value === value) continue;
      tx.prepare(conflictSql).run(seriesKey, tMs, kept.value, value, receivedMs);
      conflicts += 1;
    }
    if (conflicts > 0) tx.prepare(pruneSql).run(seriesKey, seriesKey);
    addToRollups(tx, seriesKey, stored, nowMs);
    return { stored, conflicts };
  },
};
