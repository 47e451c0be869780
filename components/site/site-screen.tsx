import { isAtLeast } from '#shared/domain/role.ts';
import { useMe } from '../../hooks/use-me.ts';
import { useSites } from '../../hooks/use-sites.ts';
import { useSystems } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Page } from '../shell/page.tsx';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { AddSystem } from './add-system.tsx';
import { AuditPart } from './audit-part.tsx';
import { InviteForm } from './invite-form.tsx';
import { MailList } from './mail-list.tsx';
import { MemberList } from './member-list.tsx';
import { Section } from '../ui/section.tsx';

/** A site: its systems, who has a role in it, and the mail that it sent. */
export function SiteScreen({ siteId }: { siteId: string }) {
  const me = useMe();
  const systems = useSystems();
  const membership = me.data?.memberships.find((one) => one.siteId === siteId);
  const timeZone = useSites().data?.find((site) => site.id === siteId)?.timeZone ?? 'UTC';
  useTitle(membership?.siteName ?? 'Site');
  if (me.isError) {
    return (
      <Page>
        <Notice error={me.error} onRetry={() => void me.refetch()} />
      </Page>
    );
  }
  if (me.data === undefined) {
    return (
      <Page>
        <Skeleton lines={6} name="Loading the site" />
      </Page>
    );
  }
  if (membership === undefined) {
    return (
      <Page>
        <Notice sentence="This site is not here, or you have no role in it." />
      </Page>
    );
  }
  const isOwner = membership.role === 'owner';
  const here = systems.data?.filter((system) => system.siteId === siteId) ?? [];
  return (
    <Page>
      <div>
        <Heading level={1}>{membership.siteName}</Heading>
        <Text soft>{`You are ${membership.role} here. Times are those of ${timeZone.replaceAll('_', ' ')}.`}</Text>
      </div>
      <Section title="Systems">
        {here.length === 0 && systems.isSuccess ? <Text soft>No system yet.</Text> : null}
        <div>
          {here.map((system) => (
            <div key={system.id}>
              <LinkText href={`/systems/${system.id}`} block>{`${system.name}, ${Math.round(system.netLitres)} L`}</LinkText>
            </div>
          ))}
        </div>
        {isAtLeast(membership.role, 'keeper') ? <AddSystem siteId={siteId} /> : null}
      </Section>
      <MemberList siteId={siteId} isOwner={isOwner} myId={me.data.id} />
      {isOwner ? <InviteForm siteId={siteId} /> : null}
      {isOwner ? <MailList siteId={siteId} /> : null}
      {isAtLeast(membership.role, 'sitter') ? <AuditPart siteId={siteId} timeZone={timeZone} /> : null}
    </Page>
  );
}
