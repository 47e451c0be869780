import type { Role } from '#shared/domain/role.ts';
import { BadInputError, RuleError } from '../errors.ts';
import type { ScheduledHead } from './scheduled-heads.ts';

export interface CeilingQuestion {
  /** The carbon heads of the system, with the doses that they would have. */
  heads: ScheduledHead[];
  override: { reason: string } | undefined;
  confirmUnknownCeiling: boolean;
  role: Role;
}

/** What a dose may pass its ceiling by and still be the ceiling: the dust of binary fractions. */
const HAIR = 1e-9;

const round = (ml: number) => Math.round(ml * 100) / 100;

/**
 * Holds the carbon heads of a system together to the ceiling. Heads with different products share it: each takes the part
 * of the ceiling that its dose is of its own, and the parts must not pass the whole.
 *
 * @returns the reason written down for going above, null where that was not needed.
 * @throws {BadInputError} for a dose whose ceiling nothing tells, until that is confirmed.
 * @throws {RuleError} `above-ceiling`, unless the owner overrides it in writing.
 */
export function checkCeiling({ heads, override, confirmUnknownCeiling, role }: CeilingQuestion): string | null {
  const dosing = heads.filter((head) => head.mlPerDay > 0);
  const unknown = dosing.filter((head) => head.ceilingMlPerDay === null);
  if (unknown.length > 0 && !confirmUnknownCeiling) {
    const which = unknown.map((head) => `head ${head.head}`).join(', ');
    throw new BadInputError([
      {
        path: 'confirmUnknownCeiling',
        message: `No label and no composition tells how much is too much for ${which}: add the product's label, or confirm that the dose is right`,
      },
    ]);
  }
  const known = dosing.flatMap((head) => (head.ceilingMlPerDay === null ? [] : [{ ...head, ceilingMlPerDay: head.ceilingMlPerDay }]));
  const share = known.reduce((sum, head) => sum + head.mlPerDay / head.ceilingMlPerDay, 0);
  if (share <= 1 + HAIR) return null;
  if (override !== undefined && role === 'owner') return override.reason;

  const doses = known.map((head) => `head ${head.head}: ${round(head.mlPerDay)} of ${round(head.ceilingMlPerDay)} mL a day`).join('; ');
  const way =
    override === undefined
      ? 'Lower the dose; the owner of the site can override this with a written reason'
      : 'Only the owner of the site can override this: lower the dose, or ask the owner to set it';
  throw new RuleError('above-ceiling', `All carbon heads together give ${Math.round(share * 100)} % of the ceiling (${doses}). ${way}.`);
}
