import { useAlarms } from '../../hooks/use-alarms.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { alarmTitles } from '../../lib/codes/alarm-words.ts';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Text } from '../ui/text.tsx';

/** The alarms of a system. */
export function AlarmsScreen({ systemId }: { systemId: string }) {
  const alarms = useAlarms(systemId);
  useTitle('Alarms', useSystem(systemId).data?.name);
  return (
    <Screen>
      <Heading level={1}>Alarms</Heading>
      {alarms.isError ? <Notice error={alarms.error} onRetry={() => void alarms.refetch()} /> : null}
      {alarms.data?.length === 0 ? <Text soft>No alarm now.</Text> : null}
      {alarms.data?.map((alarm) => (
        <LinkText key={alarm.id} href={`/systems/${systemId}/alarms/${alarm.id}`} block>
          {alarmTitles[alarm.code]}
        </LinkText>
      ))}
    </Screen>
  );
}
