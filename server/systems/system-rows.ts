import { query } from '../db/open.ts';

/** Systems with their site, and the role that a person has there; nothing of sites that the person is not in. */
export function systemRows(userId: string) {
  return query
    .selectFrom('membership')
    .innerJoin('site', 'site.id', 'membership.siteId')
    .innerJoin('system', 'system.siteId', 'site.id')
    .where('membership.userId', '=', userId)
    .select([
      'system.id',
      'system.siteId',
      'site.name as siteName',
      'site.timeZone',
      'membership.role',
      'system.name',
      'system.displayLitres',
      'system.sumpLitres',
      'system.displacementLitres',
    ]);
}

/** Volumes and name of one system of one site: what a unit of work decides by. */
export function systemOfSite(siteId: string, systemId: string) {
  return query
    .selectFrom('system')
    .where('siteId', '=', siteId)
    .where('id', '=', systemId)
    .select(['id', 'siteId', 'name', 'displayLitres', 'sumpLitres', 'displacementLitres']);
}
