import { useState } from 'react';
import { Button } from '../ui/button.tsx';
import { Table } from '../ui/table.tsx';
import type { LaneTable } from './lane-table.ts';

const rowsAtOnce = 50;

/** The table twin of a chart; long ones grow when asked. */
export function LaneTableView({ table }: { table: LaneTable }) {
  const [shownRows, setShownRows] = useState(rowsAtOnce);
  const left = table.rows.length - shownRows;
  return (
    <>
      <Table
        caption={table.rows.length === 0 ? `${table.caption}: nothing in this range` : table.caption}
        columns={table.columns.map((column, i) => ({
          key: column.key,
          title: column.title,
          numeric: column.numeric,
          cell: (row: LaneTable['rows'][number]) => row.cells[i],
        }))}
        rows={table.rows.slice(0, shownRows)}
        rowKey={(row) => row.key}
      />
      {left > 0 && (
        <Button
          kind="quiet"
          onPress={() => setShownRows(shownRows + rowsAtOnce)}
          name={`Show ${Math.min(left, rowsAtOnce)} more rows, ${left} are left`}
        >
          {`Show ${Math.min(left, rowsAtOnce)} more rows`}
        </Button>
      )}
    </>
  );
}
