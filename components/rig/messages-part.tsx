import { useState } from 'react';
import type { System } from '#shared/contract/systems.ts';
import { useDevices, useMessages, useRejects } from '../../hooks/use-rig.ts';
import { formatClockWithSeconds } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Notice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';
import { Table } from '../ui/table.tsx';
import { RigPart } from './rig-part.tsx';

/** What a device really sends, and what of it was refused and why: for whoever connects one. */
export function MessagesPart({ system }: { system: System }) {
  const devices = useDevices(system.id).data ?? [];
  const [isOpen, setOpen] = useState(false);
  const [chosen, setChosen] = useState('');
  const deviceId = chosen === '' ? (devices[0]?.id ?? '') : chosen;
  return (
    <RigPart title="Raw messages" action={<Button onPress={() => setOpen(!isOpen)}>{isOpen ? 'Hide' : 'Show'}</Button>}>
      {isOpen && deviceId === '' ? <EmptyState sentence="No device yet." /> : null}
      {isOpen && deviceId !== '' ? (
        <>
          <Select
            label="Device"
            value={deviceId}
            onChange={setChosen}
            options={devices.map((device) => ({ value: device.id, label: device.name }))}
          />
          <Messages key={deviceId} deviceId={deviceId} timeZone={system.timeZone} />
        </>
      ) : null}
    </RigPart>
  );
}

function Messages({ deviceId, timeZone }: { deviceId: string; timeZone: string }) {
  const messages = useMessages(deviceId);
  const rejects = useRejects(deviceId);
  const time = (at: string) => formatClockWithSeconds(at, timeZone);
  const word = (topic: string) => topic.split('/').at(-1) ?? topic;
  if (messages.isError) return <Notice error={messages.error} onRetry={() => void messages.refetch()} />;
  return (
    <>
      {messages.data?.length === 0 ? <EmptyState sentence="Nothing arrived since the server started." /> : null}
      {messages.data === undefined || messages.data.length === 0 ? null : (
        <Table
          caption="Newest messages"
          rows={messages.data}
          rowKey={(message) => String(message.seq)}
          columns={[
            { key: 'at', title: 'Time', cell: (message) => time(message.at) },
            { key: 'topic', title: 'Topic', cell: (message) => word(message.topic) },
            { key: 'outcome', title: 'Outcome', cell: (message) => message.outcome },
            { key: 'payload', title: 'Payload', cell: (message) => <code className="payload">{message.payload}</code> },
          ]}
        />
      )}
      {rejects.data === undefined || rejects.data.length === 0 ? null : (
        <Table
          caption="Refused"
          rows={rejects.data}
          rowKey={(reject) => String(reject.seq)}
          columns={[
            { key: 'at', title: 'Time', cell: (reject) => time(reject.at) },
            { key: 'topic', title: 'Topic', cell: (reject) => word(reject.topic) },
            { key: 'reason', title: 'Reason', cell: (reject) => reject.reason },
            { key: 'payload', title: 'Payload', cell: (reject) => <code className="payload">{reject.payload}</code> },
          ]}
        />
      )}
    </>
  );
}
