import type { Alarm } from '#shared/contract/alarms.ts';
import { Heading } from '../ui/heading.tsx';
import { Table } from '../ui/table.tsx';
import { evidenceDoses, evidenceRows } from './evidence-rows.ts';

/** The facts and doses that an alarm rests on. */
export function AlarmEvidence({ alarm, timeZone, nowMs }: { alarm: Alarm; timeZone: string; nowMs: number }) {
  const rows = evidenceRows(alarm, timeZone, nowMs);
  const doses = evidenceDoses(alarm, timeZone);
  if (rows.length === 0 && doses.length === 0) return null;
  return (
    <section aria-label="Evidence" style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <Heading level={2}>What this rests on</Heading>
      <dl className="facts">
        {rows.map((row) => (
          <div key={row.label} style={{ display: 'contents' }}>
            <dt>{row.label}</dt>
            <dd>{row.value}</dd>
          </div>
        ))}
      </dl>
      {doses.length === 0 ? null : (
        <Table
          caption="Doses counted"
          rows={doses}
          rowKey={(dose) => dose.key}
          columns={[
            { key: 'time', title: 'Time', cell: (dose) => dose.time },
            { key: 'ml', title: 'Volume', numeric: true, cell: (dose) => dose.ml },
            { key: 'source', title: 'Given by', cell: (dose) => dose.source },
          ]}
        />
      )}
    </section>
  );
}
