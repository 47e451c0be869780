import type { Core } from '../../server/core.ts';
import type { CrashPublisher } from './crash-publisher.ts';
import { rollupsFromRaw, storedRollups } from './rollup-oracle.ts';

export interface CrashFindings {
  acknowledged: number;
  /** Acknowledged, and not there as sent. */
  lost: string[];
  /** There, and never sent. */
  phantoms: string[];
  /** There more than once, or counted otherwise than once. */
  doubled: string[];
  areRollupsRight: boolean;
}

/** Compares what was acknowledged with what is there, knowing nothing of how it got there. */
export async function findings({ reader }: Core, publishers: readonly CrashPublisher[]): Promise<CrashFindings> {
  const found: CrashFindings = { acknowledged: 0, lost: [], phantoms: [], doubled: [], areRollupsRight: true };
  for (const { deviceId, sent, acknowledged } of publishers) {
    found.acknowledged += acknowledged.size;
    const samples = await reader
      .selectFrom('sample')
      .innerJoin('series', 'series.key', 'sample.seriesKey')
      .where('deviceId', '=', deviceId)
      .select(['channel', 'tMs', 'value'])
      .execute();
    const runs = await reader.selectFrom('run').where('deviceId', '=', deviceId).select(['run', 'ml']).execute();
    const ledger = await reader
      .selectFrom('doseLedger')
      .where('sourceId', 'like', `${deviceId}/%`)
      .select(['sourceId', 'deltaMl'])
      .execute();

    const stored = [...samples.map((row) => `${row.channel} ${row.tMs} ${row.value}`), ...runs.map((row) => `${row.run} ${row.ml}`)];
    const there = new Set(stored);
    if (there.size !== stored.length) found.doubled.push(`${stored.length - there.size} rows of ${deviceId}`);
    const known = new Set<string>();
    const givenMl = new Map<string, number>();
    for (const { sourceId, deltaMl } of ledger) givenMl.set(sourceId, (givenMl.get(sourceId) ?? 0) + deltaMl);

    for (const [number, message] of sent.entries()) {
      const pieces =
        message.kind === 'run'
          ? [`${message.run} ${message.ml}`]
          : message.samples.map(({ tMs, value }) => `${message.channel} ${tMs} ${value}`);
      for (const piece of pieces) known.add(piece);
      if (message.kind === 'run' && there.has(`${message.run} ${message.ml}`) && givenMl.get(`${deviceId}/${message.run}`) !== message.ml) {
        found.doubled.push(`${message.run} is not once in the ledger`);
      }
      if (acknowledged.has(number)) found.lost.push(...pieces.filter((piece) => !there.has(piece)));
    }
    found.phantoms.push(...stored.filter((piece) => !known.has(piece)));
    if (ledger.length !== runs.length) found.doubled.push(`${ledger.length} rows in the ledger for ${runs.length} runs of ${deviceId}`);
  }
  const [is, shouldBe] = await Promise.all([storedRollups({ reader }), rollupsFromRaw({ reader })]);
  found.areRollupsRight = JSON.stringify(is) === JSON.stringify(shouldBe);
  return found;
}
