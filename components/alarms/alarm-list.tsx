import type { Alarm } from '#shared/contract/alarms.ts';
import { comparePriority } from '#shared/domain/alarm-priority.ts';
import { AlarmRow } from './alarm-row.tsx';

/** Alarms with the most pressing first, or newest first as the log. */
export function AlarmList({
  name,
  alarms,
  order,
  timeZone,
  nowMs,
}: {
  name: string;
  alarms: readonly Alarm[];
  order: 'pressing' | 'newest';
  timeZone: string;
  nowMs: number;
}) {
  const sorted = [...alarms].sort((a, b) => {
    const byPriority = order === 'pressing' ? comparePriority(b.priority, a.priority) : 0;
    return byPriority !== 0 ? byPriority : Date.parse(b.raisedAt) - Date.parse(a.raisedAt);
  });
  return (
    <ul className="alarm-list" aria-label={name}>
      {sorted.map((alarm) => (
        <li key={alarm.id}>
          <AlarmRow alarm={alarm} timeZone={timeZone} nowMs={nowMs} />
        </li>
      ))}
    </ul>
  );
}
