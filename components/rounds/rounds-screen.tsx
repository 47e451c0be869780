import { isAtLeast } from '#shared/domain/role.ts';
import { useMe } from '../../hooks/use-me.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Page } from '../shell/page.tsx';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Section } from '../ui/section.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { AddSite } from './add-site.tsx';
import { RoundsList } from './rounds-list.tsx';
import { useRounds } from './use-rounds.ts';

/** All one's systems, worst first, a sentence each. */
export function RoundsScreen() {
  useTitle('Rounds');
  const { query, rounds, moved, counts, sortAgain } = useRounds();
  const me = useMe();
  const keptSite = me.data?.memberships.find((membership) => isAtLeast(membership.role, 'keeper'));

  return (
    <Page>
      <div style={{ display: 'flex', flexDirection: 'column', gap: 4 }}>
        <Heading level={1}>Rounds</Heading>
        <Text soft>{query.data === undefined ? ' ' : counts}</Text>
      </div>
      {query.isError ? <Notice error={query.error} onRetry={() => void query.refetch()} /> : null}
      {query.data === undefined && !query.isError ? <Skeleton lines={8} name="Loading rounds" /> : null}
      {moved === 0 ? null : <Button onPress={sortAgain}>{`${moved} changed: sort again`}</Button>}
      {rounds.length === 0 ? null : <RoundsList rounds={rounds} />}
      {query.data?.length === 0 ? (
        <EmptyState
          sentence={
            keptSite === undefined
              ? 'No system yet. Somebody who keeps one can invite you.'
              : 'No system yet. Add the first one with its litres.'
          }
        >
          {keptSite === undefined ? null : (
            <LinkText href={`/sites/${keptSite.siteId}`} block>
              Add a system
            </LinkText>
          )}
        </EmptyState>
      ) : null}
      {query.data !== undefined && me.data !== undefined ? (
        <Section title="Sites" aside={<AddSite />}>
          <div>
            {me.data.memberships.map((membership) => (
              <div key={membership.siteId}>
                <LinkText href={`/sites/${membership.siteId}`} block>
                  {membership.siteName}
                </LinkText>
              </div>
            ))}
          </div>
        </Section>
      ) : null}
    </Page>
  );
}
