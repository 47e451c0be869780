/** Portions of one day for one head. */
export interface SlotLayout {
  slotMl: number;
  /** Minutes of the UTC day, ascending, unique. */
  slotsUtcMin: number[];
}

/** A stretch of the UTC day that may cross midnight: from `startUtcMin` for `lengthMin` minutes, its end excluded. */
export interface DayWindow {
  startUtcMin: number;
  lengthMin: number;
}

/** Even one portion a day would be under what the pump gives accurately. */
export class PortionTooSmallError extends Error {
  readonly mlPerDay: number;
  readonly smallestMl: number;
  /** How many times as much liquid, at least, makes one portion a day large enough, rounded up to a whole number. */
  readonly dilution: number;

  constructor(mlPerDay: number, smallestMl: number) {
    const dilution = Math.ceil(smallestMl / mlPerDay);
    super(
      `${mlPerDay} mL a day is less than the smallest portion that this head gives accurately, ${smallestMl} mL. ` +
        `Dilute the product to at least ${dilution} times its volume and set ${dilution} times the dose.`,
    );
    this.mlPerDay = mlPerDay;
    this.smallestMl = smallestMl;
    this.dilution = dilution;
  }
}

const MINUTES_PER_DAY = 1440;

/** Portions are set in thousandths of a millilitre. */
const STEPS_PER_ML = 1000;

/** Keeps 0.525 mL, which a division may leave a hair under itself, from being rounded down to 0.524. */
const HAIR = 1e-6;

/** Rounds a portion down to what can be set, mL, so that a day of portions never passes the day's dose. */
function portionMl(mlPerDay: number, slots: number): number {
  return Math.floor((mlPerDay / slots) * STEPS_PER_ML + HAIR) / STEPS_PER_ML;
}

/** The most portions of at least `smallestMl` that a day's dose makes; 0 when it makes none. */
export function mostSlots(mlPerDay: number, smallestMl: number): number {
  return Math.floor(mlPerDay / smallestMl + HAIR);
}

/**
 * Spreads a day's dose evenly over a window, in fewer portions than asked when they would be under `smallestMl`.
 *
 * Example: 2.1 mL a day in 12 slots is 0.175 mL each; with a smallest portion of 0.5 mL it is 4 slots of 0.525 mL.
 *
 * @param mlPerDay above 0, mL
 * @param slots the number asked for, from 1 to the minutes of the window
 * @throws {PortionTooSmallError} when even one portion would be too small
 */
export function layOutSlots(mlPerDay: number, slots: number, smallestMl: number, window: DayWindow): SlotLayout {
  const given = Math.min(slots, mostSlots(mlPerDay, smallestMl));
  if (given < 1) throw new PortionTooSmallError(mlPerDay, smallestMl);
  const slotsUtcMin = Array.from(
    { length: given },
    (_, index) => (window.startUtcMin + Math.floor((index * window.lengthMin) / given)) % MINUTES_PER_DAY,
  ).sort((one, other) => one - other);
  return { slotMl: portionMl(mlPerDay, given), slotsUtcMin };
}

/**
 * Divides a day's dose over times that a person chose, which stay as they are.
 *
 * @param mlPerDay above 0, mL
 * @param slotsUtcMin minutes of the UTC day, in any order; one given twice counts once
 * @returns null when the portions would be under `smallestMl`; {@link mostSlots} tells how many times would do
 */
export function divideOverTimes(mlPerDay: number, slotsUtcMin: readonly number[], smallestMl: number): SlotLayout | null {
  const minutes = [...new Set(slotsUtcMin)].sort((one, other) => one - other);
  if (minutes.length > mostSlots(mlPerDay, smallestMl)) return null;
  return { slotMl: portionMl(mlPerDay, minutes.length), slotsUtcMin: minutes };
}
