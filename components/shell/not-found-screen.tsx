import { useTitle } from '../../hooks/use-title.ts';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Text } from '../ui/text.tsx';
import { Page } from './page.tsx';

export function NotFoundScreen() {
  useTitle('Not found');
  return (
    <Page>
      <Heading level={1}>Nothing here</Heading>
      <Text>This address leads nowhere in Steadfall.</Text>
      <LinkText href="/" block>
        To rounds
      </LinkText>
    </Page>
  );
}
