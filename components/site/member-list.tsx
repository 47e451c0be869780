import { roles, type Role } from '#shared/domain/role.ts';
import { useMembers, useRemoveMember, useSetRole } from '../../hooks/use-sites.ts';
import { Button } from '../ui/button.tsx';
import { Notice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { Section } from '../ui/section.tsx';

export const roleOptions = roles.map((role) => ({ value: role, label: role }));

export function MemberList({ siteId, isOwner, myId }: { siteId: string; isOwner: boolean; myId: string }) {
  const members = useMembers(siteId);
  const setRole = useSetRole(siteId);
  const remove = useRemoveMember(siteId);
  return (
    <Section title="Members">
      {members.isError ? <Notice error={members.error} onRetry={() => void members.refetch()} /> : null}
      {members.isPending ? <Skeleton lines={3} name="Loading members" /> : null}
      <ul className="rounds">
        {members.data?.map((member) => (
          <li key={member.userId} className="round">
            <span className="round-head">
              <Text bold>{member.userId === myId ? `${member.name} (you)` : member.name}</Text>
              {isOwner && member.userId !== myId ? (
                <Button kind="quiet" name={`Take out ${member.name}`} onPress={() => remove.mutate(member.userId)}>
                  Take out
                </Button>
              ) : (
                <Text>{member.role}</Text>
              )}
            </span>
            {member.email === null ? null : (
              <Text variant="note" soft>
                {member.email}
              </Text>
            )}
            {isOwner && member.userId !== myId ? (
              <Select<Role>
                label={`Role of ${member.name}`}
                value={member.role}
                options={roleOptions}
                onChange={(role) => setRole.mutate({ userId: member.userId, role })}
              />
            ) : null}
          </li>
        ))}
      </ul>
      {setRole.isError ? <Notice error={setRole.error} /> : null}
      {remove.isError ? <Notice error={remove.error} /> : null}
    </Section>
  );
}
