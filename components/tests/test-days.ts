import type { Test } from '#shared/contract/records.ts';
import { formatDayTitle, inZone } from '../../lib/format/time.ts';

export interface TestDay {
  /** The day of the site, `2026-11-24`. */
  day: string;
  title: string;
  tests: Test[];
}

/** Tests under the day of the site on which they were made, in the order given. */
export function testDays(tests: readonly Test[], timeZone: string, nowMs: number): TestDay[] {
  const days = new Map<string, TestDay>();
  for (const test of tests) {
    const day = inZone(test.at, timeZone).toFormat('yyyy-MM-dd');
    const known = days.get(day);
    if (known === undefined) days.set(day, { day, title: formatDayTitle(test.at, timeZone, nowMs), tests: [test] });
    else known.tests.push(test);
  }
  return [...days.values()];
}
