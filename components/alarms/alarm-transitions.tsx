import type { z } from 'zod';
import type { alarmTransitionSchema } from '#shared/contract/alarms.ts';
import { formatNear } from '../../lib/format/time.ts';
import { Heading } from '../ui/heading.tsx';
import { Table } from '../ui/table.tsx';

type Transition = z.infer<typeof alarmTransitionSchema>;

const actionWords: Record<string, string> = {
  occur: 'went off',
  're-alarm': 'went off again',
  return: 'over',
  acknowledge: 'seen',
  reset: 'reset',
  shelve: 'made quiet',
  unshelve: 'no longer quiet',
  take: 'taken on',
  record: 'recorded late',
};

/** What happened to the alarm and who did it, newest first. */
export function AlarmTransitions({
  transitions,
  timeZone,
  nowMs,
}: {
  transitions: readonly Transition[];
  timeZone: string;
  nowMs: number;
}) {
  if (transitions.length === 0) return null;
  return (
    <section aria-label="Log" style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <Heading level={2}>Log</Heading>
      <Table
        caption="What happened to this alarm"
        hideCaption
        rows={[...transitions].sort((a, b) => b.seq - a.seq)}
        rowKey={(transition) => String(transition.seq)}
        columns={[
          { key: 'at', title: 'Time', cell: (transition) => formatNear(transition.at, timeZone, nowMs) },
          { key: 'action', title: 'What', cell: (transition) => actionWords[transition.action] ?? transition.action },
          { key: 'who', title: 'Who', cell: (transition) => transition.actorName ?? 'Steadfall' },
          { key: 'reason', title: 'Why', cell: (transition) => transition.reason ?? '' },
        ]}
      />
    </section>
  );
}
