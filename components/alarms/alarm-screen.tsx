import { useAlarm } from '../../hooks/use-alarms.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { alarmStateSentence, alarmTitles } from '../../lib/codes/alarm-words.ts';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';

/** One alarm. */
export function AlarmScreen({ systemId, alarmId }: { systemId: string; alarmId: string }) {
  const alarm = useAlarm(alarmId);
  useTitle(alarm.data === undefined ? 'Alarm' : alarmTitles[alarm.data.alarm.code]);
  return (
    <Screen>
      <LinkText href={`/systems/${systemId}/alarms`} block>
        All alarms
      </LinkText>
      <Heading level={1}>{alarm.data === undefined ? 'Alarm' : alarmTitles[alarm.data.alarm.code]}</Heading>
      {alarm.isError ? <Notice error={alarm.error} onRetry={() => void alarm.refetch()} /> : null}
      {alarm.isPending ? <Skeleton lines={4} name="Loading the alarm" /> : null}
      {alarm.data === undefined ? null : <Text>{alarmStateSentence(alarm.data.alarm.state, null)}</Text>}
    </Screen>
  );
}
