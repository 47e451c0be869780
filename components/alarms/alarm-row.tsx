import { Link } from 'expo-router';
import type { Alarm } from '#shared/contract/alarms.ts';
import { alarmStateSentence, alarmTitles } from '../../lib/codes/alarm-words.ts';
import { formatAgo, formatNear } from '../../lib/format/time.ts';
import { PriorityBars } from '../ui/priority-bars.tsx';
import { alarmSentence } from './alarm-sentence.ts';

/** One alarm in a list; the whole row is the link. An urgent one that still asks for somebody is a filled block. */
export function AlarmRow({ alarm, timeZone, nowMs }: { alarm: Alarm; timeZone: string; nowMs: number }) {
  const isCalling = alarm.priority === 'urgent' && (alarm.active || !alarm.acknowledged);
  const until = alarm.shelvedUntil === null ? null : formatNear(alarm.shelvedUntil, timeZone, nowMs);
  return (
    <Link href={`/systems/${alarm.systemId}/alarms/${alarm.id}`} asChild>
      <a className={isCalling ? 'alarm-row alarm-row-urgent' : 'alarm-row'}>
        <span className="alarm-row-head">
          <span className="alarm-row-title">{alarmTitles[alarm.code]}</span>
          <PriorityBars priority={alarm.priority} />
        </span>
        <span>{alarmSentence(alarm, timeZone, nowMs)}</span>
        <span className="alarm-row-note">{`${alarmStateSentence(alarm.state, until)}. ${formatAgo(alarm.raisedAt, timeZone, nowMs)}.`}</span>
      </a>
    </Link>
  );
}
