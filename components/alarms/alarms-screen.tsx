import { useState } from 'react';
import { useAlarmLog, useAlarms } from '../../hooks/use-alarms.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { EmptyState } from '../ui/empty-state.tsx';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Tabs } from '../ui/tabs.tsx';
import { AlarmList } from './alarm-list.tsx';
import './alarms.css';
import { LimitsPart } from './limits-part.tsx';

const parts = [
  { value: 'now', label: 'Now' },
  { value: 'limits', label: 'Limits' },
  { value: 'log', label: 'Log' },
] as const;
type Part = (typeof parts)[number]['value'];

/** The alarms of a system: what asks for somebody now, the limits that watch, and what was. */
export function AlarmsScreen({ systemId }: { systemId: string }) {
  const system = useSystem(systemId).data;
  const [part, setPart] = useState<Part>('now');
  useTitle('Alarms', system?.name);
  const timeZone = system?.timeZone ?? 'UTC';
  return (
    <Screen>
      <Heading level={1}>Alarms</Heading>
      <Tabs name="Part" value={part} onChange={setPart} tabs={parts}>
        {part === 'now' ? <NowPart systemId={systemId} timeZone={timeZone} /> : null}
        {part === 'limits' ? <LimitsPart systemId={systemId} role={system?.role ?? 'viewer'} /> : null}
        {part === 'log' ? <LogPart systemId={systemId} timeZone={timeZone} /> : null}
      </Tabs>
    </Screen>
  );
}

function NowPart({ systemId, timeZone }: { systemId: string; timeZone: string }) {
  const alarms = useAlarms(systemId);
  const nowMs = useNow();
  if (alarms.isError) return <Notice error={alarms.error} onRetry={() => void alarms.refetch()} />;
  if (alarms.data === undefined) return <Skeleton lines={4} name="Loading the alarms" />;
  if (alarms.data.length === 0) return <EmptyState sentence="Nothing asks for you. Alarms that are over stand in the log." />;
  return <AlarmList name="Alarms now" alarms={alarms.data} order="pressing" timeZone={timeZone} nowMs={nowMs} />;
}

function LogPart({ systemId, timeZone }: { systemId: string; timeZone: string }) {
  const log = useAlarmLog(systemId);
  const nowMs = useNow();
  if (log.isError) return <Notice error={log.error} onRetry={() => void log.refetch()} />;
  if (log.data === undefined) return <Skeleton lines={4} name="Loading the log" />;
  if (log.data.length === 0) return <EmptyState sentence="No alarm has ended yet." />;
  return <AlarmList name="Alarms that are over" alarms={log.data} order="newest" timeZone={timeZone} nowMs={nowMs} />;
}
