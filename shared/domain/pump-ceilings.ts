/** What a pump never gives more of on its own account, whatever asks for it, mL. */
export interface PumpCeilings {
  maxMlPerRun: number;
  maxMlPerHour: number;
  maxMlPerDay: number;
}

const MINUTES_PER_DAY = 1440;
const MINUTES_PER_HOUR = 60;

/** Takes off the dust of binary fractions: a millionth of a millilitre is far below what any pump can give. */
const roundMl = (ml: number): number => Math.round(ml * 1e6) / 1e6;

/** The most slots that fall into any 60 minutes, midnight crossed; a slot one hour later falls into the next hour. */
function fullestHour(slotsUtcMin: readonly number[]): number {
  const counts = slotsUtcMin.map(
    (start) => slotsUtcMin.filter((minute) => (minute - start + MINUTES_PER_DAY) % MINUTES_PER_DAY < MINUTES_PER_HOUR).length,
  );
  return Math.max(0, ...counts);
}

/**
 * The ceilings that go with a head's slots: 1.2 slots a run; the fullest hour and one slot more; the day and one slot more.
 * The extra slot leaves room for a start up to 60 s late and for the change from one schedule to the next.
 *
 * Example: 0.5 mL at minutes 480, 600 and 720 gives 0.6 mL a run, 1.0 mL an hour and 2.0 mL a day.
 *
 * @param slotMl one portion, mL
 * @param slotsUtcMin minutes of the UTC day, unique
 */
export function pumpCeilings(slotMl: number, slotsUtcMin: readonly number[]): PumpCeilings {
  return {
    maxMlPerRun: roundMl(1.2 * slotMl),
    maxMlPerHour: roundMl((fullestHour(slotsUtcMin) + 1) * slotMl),
    maxMlPerDay: roundMl((slotsUtcMin.length + 1) * slotMl),
  };
}
