import type { DoseColumns, Tape } from '#shared/contract/telemetry.ts';
import type { Core } from '../core.ts';
import { BadInputError, NotFoundError } from '../errors.ts';
import { siteDay } from '../systems/site-day.ts';
import { readDoses } from './read-doses.ts';
import { readTape } from './read-tape.ts';

export interface Doses {
  /** The drop tape of a range, by default of the site's day; `to` follows `from` by a day when left out. */
  tape(systemId: string, fromMs?: number, toMs?: number): Promise<Tape>;
  /** Carbon by bucket, at most `points` of them. */
  doses(systemId: string, fromMs: number, toMs: number, points: number): Promise<DoseColumns>;
}

const DAY_MS = 86_400_000;
const LONGEST_TAPE_MS = 31 * DAY_MS;
const LONGEST_DOSES_MS = 20 * 366 * DAY_MS;

/** What was given, and what was to be given. */
export function createDoses(core: Core): Doses {
  async function timeZoneOf(systemId: string): Promise<string> {
    const row = await core.reader
      .selectFrom('system')
      .innerJoin('site', 'site.id', 'system.siteId')
      .select('site.timeZone')
      .where('system.id', '=', systemId)
      .executeTakeFirst();
    if (row === undefined) throw new NotFoundError('There is no such system');
    return row.timeZone;
  }

  function requireRange(fromMs: number, toMs: number, longestMs: number): void {
    if (toMs <= fromMs) throw new BadInputError([{ path: 'to', message: 'The end must be after the start' }]);
    if (toMs - fromMs > longestMs) {
      throw new BadInputError([{ path: 'to', message: `Ask for at most ${Math.floor(longestMs / DAY_MS)} days at once` }]);
    }
  }

  return {
    async tape(systemId, givenFromMs, givenToMs) {
      const timeZone = await timeZoneOf(systemId);
      const nowMs = core.clock.nowMs();
      const day = siteDay(timeZone, givenFromMs ?? (givenToMs === undefined ? nowMs : givenToMs - 1));
      const fromMs = givenFromMs ?? day.fromMs;
      const toMs = givenToMs ?? (givenFromMs === undefined ? day.toMs : givenFromMs + DAY_MS);
      requireRange(fromMs, toMs, LONGEST_TAPE_MS);
      return readTape(core.reader, { systemId, fromMs, toMs, nowMs });
    },
    async doses(systemId, fromMs, toMs, points) {
      requireRange(fromMs, toMs, LONGEST_DOSES_MS);
      return readDoses(core.reader, { systemId, timeZone: await timeZoneOf(systemId), fromMs, toMs, points });
    },
  };
}
