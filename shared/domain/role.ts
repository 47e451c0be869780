import { z } from 'zod';

/** From the least to the most that a person may do in a site. */
export const roles = ['viewer', 'sitter', 'keeper', 'owner'] as const;

export const roleSchema = z.enum(roles);
export type Role = z.infer<typeof roleSchema>;

/** True when `role` may do what `least` may. */
export function isAtLeast(role: Role, least: Role): boolean {
  return roles.indexOf(role) >= roles.indexOf(least);
}
