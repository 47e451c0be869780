import { openReadingConnection } from '../db/open.ts';

/** A row of the change log with its frame as it goes over the wire, made once for all who get it. */
export interface LoggedChange {
  seq: number;
  systemId: string;
  frame: string;
}

interface ChangeRow {
  seq: number;
  systemId: string;
  type: string;
  payload: string;
}

export interface ChangeLog {
  /** The newest `seq` ever given out, also when its row is pruned; 0 before the first. */
  newest(): number;
  /** The oldest row that is kept; null when none is. */
  oldest(): number | null;
  /** Rows after `seq`, in order. */
  after(seq: number, limit: number): LoggedChange[];
  /** The same of some systems only: what the others did is passed over by the database, which takes a fraction of the time. */
  ofSystemsAfter(systemIds: readonly string[], seq: number, limit: number): LoggedChange[];
  close(): void;
}

/** `payload` is JSON already and goes in as it is. */
function frameOf(row: ChangeRow): LoggedChange {
  const frame = `{"seq":${row.seq},"type":${JSON.stringify(row.type)},"systemId":${JSON.stringify(row.systemId)},"data":${row.payload}}`;
  return { seq: row.seq, systemId: row.systemId, frame };
}

/** Reads the change log synchronously on a connection of its own, so that resuming and following cannot miss or repeat a row. */
export function openChangeLog(databaseFile: string): ChangeLog {
  const connection = openReadingConnection(databaseFile);
  const newest = connection.prepare<[], { seq: number }>("select seq from sqlite_sequence where name = 'change'");
  const oldest = connection.prepare<[], { seq: number | null }>('select min(seq) as seq from change');
  const after = connection.prepare<[number, number], ChangeRow>(
    'select seq, systemId, type, payload from change where seq > ? order by seq limit ?',
  );
  // The sign keeps the planner on the order of `seq`.
  const ofSystemsAfter = connection.prepare<[number, string, number], ChangeRow>(
    'select seq, systemId, type, payload from change where seq > ? and +systemId in (select value from json_each(?)) order by seq limit ?',
  );
  return {
    newest: () => newest.get()?.seq ?? 0,
    oldest: () => oldest.get()?.seq ?? null,
    after: (seq, limit) => after.all(seq, limit).map(frameOf),
    ofSystemsAfter: (systemIds, seq, limit) => ofSystemsAfter.all(seq, JSON.stringify(systemIds), limit).map(frameOf),
    close: () => void connection.close(),
  };
}
