import type { Core } from '../core.ts';
import type { Row } from '../db/schema.ts';
import type { Sites } from '../sites/create-sites.ts';
import { type AuditRow, auditOfSite, outboxOfSite } from '../sites/site-log.ts';
import { pageFrom, pageRequest, pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

const readJson = (text: string | null): unknown => (text === null ? null : JSON.parse(text));

const asAuditEntry = ({ atMs, siteId: _, before, after, ...entry }: AuditRow) => ({
  ...entry,
  at: new Date(atMs).toISOString(),
  before: readJson(before),
  after: readJson(after),
});

const asMail = (notice: Row<'notice'>) => ({
  id: notice.id,
  to: notice.toAddress,
  subject: notice.subject,
  body: notice.body,
  state: notice.state,
  createdAt: new Date(notice.createdAtMs).toISOString(),
});

export function siteHandlers({ reader }: Core, sites: Sites) {
  return handlers({
    listSites: async ({ person, query }) => pageOfWhole(await sites.list(person.userId), query),
    async createSite({ person, body, repeated }) {
      const { value, isRepeated } = await sites.create(person.userId, body);
      if (isRepeated) repeated();
      return value;
    },
    listMembers: async ({ site, query }) => pageOfWhole(await sites.members(site.id, site.role), query),
    async invite({ site, person, body, repeated }) {
      const { value, isRepeated } = await sites.invite(site.id, person.userId, body);
      if (isRepeated) repeated();
      return value;
    },
    setRole: ({ site, person, params, body }) => sites.setRole(site.id, person.userId, params.userId, body.role),
    async removeMember({ site, person, params }) {
      await sites.remove(site.id, person.userId, params.userId);
      return {};
    },
    async listAudit({ site, query }) {
      const rows = await auditOfSite(reader, site.id, pageRequest(query));
      return pageFrom(rows, query, (row) => ({ key: row.seq, id: '' }), asAuditEntry);
    },
    async listOutbox({ site, query }) {
      const rows = await outboxOfSite(reader, site.id, pageRequest(query));
      return pageFrom(rows, query, (row) => ({ key: row.createdAtMs, id: row.id }), asMail);
    },
  });
}
