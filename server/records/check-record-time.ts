import { recordTimeProblem } from '#shared/domain/record-time.ts';
import { BadInputError } from '../errors.ts';

export const recordTimeMessages = {
  'in-the-future': 'This is in the future; give the time at which it was done',
  'too-early': 'This is before 1990; check the year',
};

/** The time of a record by hand, UTC ms. @throws {BadInputError} at `at` for one in the future or before 1990. */
export function checkRecordTime(at: string, nowMs: number): number {
  const atMs = Date.parse(at);
  const problem = recordTimeProblem(atMs, nowMs);
  if (problem !== null) throw new BadInputError([{ path: 'at', message: recordTimeMessages[problem] }]);
  return atMs;
}
