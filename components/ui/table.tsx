import { useMemo, useState, type ReactNode } from 'react';

export interface Column<Row> {
  key: string;
  title: string;
  /** Figures, right-aligned under their title. */
  numeric?: boolean;
  cell: (row: Row) => ReactNode;
  /** Makes the column sortable by this value. */
  sortBy?: (row: Row) => number | string;
}

export interface TableProps<Row> {
  caption: string;
  /** For a screen reader only, where a heading says the same. */
  hideCaption?: boolean;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
  /** Opens a row. The first cell then holds a button for the keyboard. */
  onOpen?: (row: Row) => void;
  openName?: (row: Row) => string;
  selectedKey?: string | null;
}

type Sorting = { key: string; ascending: boolean } | null;

function compare(a: number | string, b: number | string): number {
  return typeof a === 'number' && typeof b === 'number' ? a - b : String(a).localeCompare(String(b));
}

/** A real table. It keeps the order of `rows` until a person sorts it by a column. */
export function Table<Row>({ caption, hideCaption, columns, rows, rowKey, onOpen, openName, selectedKey }: TableProps<Row>) {
  const [sorting, setSorting] = useState<Sorting>(null);
  const sorted = useMemo(() => {
    const sortBy = sorting === null ? undefined : columns.find((column) => column.key === sorting.key)?.sortBy;
    if (sorting === null || sortBy === undefined) return rows;
    const direction = sorting.ascending ? 1 : -1;
    return [...rows].sort((a, b) => direction * compare(sortBy(a), sortBy(b)));
  }, [columns, rows, sorting]);

  return (
    <div className="table-frame" role="region" aria-label={caption} tabIndex={0}>
      <table className="table">
        <caption className={hideCaption === true ? 'visually-hidden' : undefined}>{caption}</caption>
        <thead>
          <tr>
            {columns.map((column) => (
              <HeaderCell key={column.key} column={column} sorting={sorting} onSort={setSorting} />
            ))}
          </tr>
        </thead>
        <tbody>
          {sorted.map((row) => {
            const key = rowKey(row);
            const classes = [onOpen && 'table-row-button', key === selectedKey && 'table-row-selected'].filter(Boolean).join(' ');
            return (
              <tr key={key} className={classes} onClick={onOpen && (() => onOpen(row))}>
                {columns.map((column, index) => (
                  <td key={column.key} className={column.numeric === true ? 'numeric' : undefined}>
                    {index === 0 && onOpen !== undefined ? (
                      <button
                        type="button"
                        className="button button-quiet"
                        aria-label={openName?.(row)}
                        onClick={(event) => {
                          event.stopPropagation();
                          onOpen(row);
                        }}
                      >
                        {column.cell(row)}
                      </button>
                    ) : (
                      column.cell(row)
                    )}
                  </td>
                ))}
              </tr>
            );
          })}
        </tbody>
      </table>
    </div>
  );
}

function HeaderCell<Row>({ column, sorting, onSort }: { column: Column<Row>; sorting: Sorting; onSort: (next: Sorting) => void }) {
  const classes = [column.numeric === true && 'numeric', column.sortBy !== undefined && 'sortable'].filter(Boolean).join(' ');
  if (column.sortBy === undefined) {
    return (
      <th scope="col" className={classes}>
        {column.title}
      </th>
    );
  }
  const mine = sorting?.key === column.key ? sorting : null;
  const direction = mine === null ? 'none' : mine.ascending ? 'ascending' : 'descending';
  const mark = mine === null ? '\u2195' : mine.ascending ? '\u2191' : '\u2193';
  return (
    <th scope="col" className={classes} aria-sort={direction}>
      <button type="button" className="table-sort" onClick={() => onSort({ key: column.key, ascending: mine === null || !mine.ascending })}>
        {column.title}
        <span aria-hidden="true">{mark}</span>
      </button>
    </th>
  );
}
