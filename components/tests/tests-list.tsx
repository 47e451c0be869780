import type { Test } from '#shared/contract/records.ts';
import { formatNear } from '../../lib/format/time.ts';
import { Table } from '../ui/table.tsx';
import { placeWords, quantityNames, resultWords } from './result-words.ts';

/** The tests, newest first; a row opens for those who may correct it. */
export function TestsList({
  tests,
  timeZone,
  nowMs,
  isWide,
  onOpen,
}: {
  tests: readonly Test[];
  timeZone: string;
  nowMs: number;
  isWide: boolean;
  onOpen?: (test: Test) => void;
}) {
  const when = (test: Test) => formatNear(test.at, timeZone, nowMs);
  return (
    <Table
      caption="Tests"
      rows={tests}
      rowKey={(test) => test.id}
      onOpen={onOpen}
      openName={(test) => `${quantityNames[test.quantity]} ${resultWords(test)}, ${when(test)}: open`}
      columns={[
        { key: 'at', title: 'When', cell: when, sortBy: (test) => Date.parse(test.at) },
        { key: 'quantity', title: 'Test', cell: (test) => quantityNames[test.quantity], sortBy: (test) => test.quantity },
        {
          key: 'value',
          title: 'Result',
          numeric: true,
          cell: (test) => `${resultWords(test)}${test.edited ? ' (corrected)' : ''}`,
          sortBy: (test) => test.canonicalMgPerL,
        },
        { key: 'place', title: 'Band', cell: (test) => placeWords(test) ?? '' },
        ...(isWide
          ? [
              { key: 'by', title: 'By', cell: (test: Test) => test.by },
              { key: 'note', title: 'Note', cell: (test: Test) => test.note },
            ]
          : []),
      ]}
    />
  );
}
