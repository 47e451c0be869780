import type { Alarm } from '#shared/contract/alarms.ts';
import type { System } from '#shared/contract/systems.ts';
import { useAlarm } from '../../hooks/use-alarms.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { alarmStateSentence, alarmTitles } from '../../lib/codes/alarm-words.ts';
import { formatAgo, formatDayAndClock, formatNear } from '../../lib/format/time.ts';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { PriorityBars } from '../ui/priority-bars.tsx';
import { Screen } from '../ui/screen.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { UrgentBlock } from '../ui/urgent-block.tsx';
import { AlarmActions } from './alarm-actions.tsx';
import { AlarmAdvice } from './alarm-advice.tsx';
import { AlarmEvidence } from './alarm-evidence.tsx';
import { alarmSentence } from './alarm-sentence.ts';
import { AlarmTransitions } from './alarm-transitions.tsx';
import './alarms.css';

/** One alarm: what happened, what to do first, who is on it, what it rests on, and what was done. */
export function AlarmScreen({ systemId, alarmId }: { systemId: string; alarmId: string }) {
  const detail = useAlarm(alarmId);
  const system = useSystem(systemId).data;
  const nowMs = useNow();
  const alarm = detail.data?.alarm;
  const title = alarm === undefined ? 'Alarm' : alarmTitles[alarm.code];
  useTitle(title, system?.name);
  return (
    <Screen>
      <LinkText href={`/systems/${systemId}/alarms`} block>
        All alarms
      </LinkText>
      {detail.isError ? <Notice error={detail.error} onRetry={() => void detail.refetch()} /> : null}
      {detail.isPending ? <Skeleton lines={6} name="Loading the alarm" /> : null}
      {alarm === undefined || system === undefined ? null : (
        <>
          <AlarmHead alarm={alarm} system={system} nowMs={nowMs} />
          <AlarmAdvice alarm={alarm} status={system.status} />
          <AlarmActions alarm={alarm} system={system} nowMs={nowMs} />
          <AlarmEvidence alarm={alarm} timeZone={system.timeZone} nowMs={nowMs} />
          <AlarmTransitions transitions={detail.data?.transitions ?? []} timeZone={system.timeZone} nowMs={nowMs} />
        </>
      )}
    </Screen>
  );
}

function AlarmHead({ alarm, system, nowMs }: { alarm: Alarm; system: System; nowMs: number }) {
  const until = alarm.shelvedUntil === null ? null : formatNear(alarm.shelvedUntil, system.timeZone, nowMs);
  const isCalling = alarm.priority === 'urgent' && (alarm.active || !alarm.acknowledged);
  const head = (
    <div style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <Heading level={1} variant="heading" inherit>
        {alarmTitles[alarm.code]}
      </Heading>
      <PriorityBars priority={alarm.priority} />
      <Text inherit variant="sentence">
        {alarmSentence(alarm, system.timeZone, nowMs)}
      </Text>
      <Text inherit bold>{`${alarmStateSentence(alarm.state, until)}.`}</Text>
      <Text inherit variant="note">
        {`Since ${formatAgo(alarm.raisedAt, system.timeZone, nowMs)} (${formatDayAndClock(alarm.raisedAt, system.timeZone, nowMs)}). State by ISA-18.2: ${alarm.state}.`}
      </Text>
    </div>
  );
  return isCalling ? <UrgentBlock>{head}</UrgentBlock> : head;
}
