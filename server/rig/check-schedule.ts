import { RuleError } from '../errors.ts';
import type { HeadUse } from './head-use.ts';

/**
 * Refuses a change under which a schedule that runs could not have been set: portions smaller than the head can give, or
 * a dose whose ceiling was another product's, or none since it was not carbon.
 * @throws {RuleError} `schedule-no-longer-fits`
 */
export function checkSchedule(before: HeadUse, after: HeadUse, schedule: { mlPerDay: number; slotMl: number }): void {
  if (schedule.mlPerDay === 0) return;
  const tooSmall = after.smallestMl > before.smallestMl && after.smallestMl > schedule.slotMl;
  const becomesCarbon = after.kind === 'carbon' && before.kind !== 'carbon';
  const otherCeiling = after.kind === 'carbon' && after.productId !== before.productId;
  if (!tooSmall && !becomesCarbon && !otherCeiling) return;
  const why = tooSmall
    ? `its portions of ${schedule.slotMl} mL would be smaller than the head can give`
    : 'its dose was not held to the ceiling of what the head would give';
  throw new RuleError('schedule-no-longer-fits', `The schedule of this head no longer fits: ${why}. Set a new dose first, or 0.`);
}
