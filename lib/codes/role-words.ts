import type { Role } from '#shared/domain/role.ts';

/** What a role may do, in one line. */
export const roleSentences: Record<Role, string> = {
  owner: 'Everything, members and deleting included',
  keeper: 'Runs the systems: devices, limits, tests, resume',
  sitter: 'Looks in: tests, hand doses, refills, acknowledge, stop',
  viewer: 'Reads the state and the charts',
};
