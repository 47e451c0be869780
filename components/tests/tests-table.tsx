import type { Test } from '#shared/contract/records.ts';
import { formatNear } from '../../lib/format/time.ts';
import { Table } from '../ui/table.tsx';
import { placeWords, quantityNames, resultWords } from './result-words.ts';

/** The tests on a wide screen, newest first; a row opens for those who may correct it. */
export function TestsTable({
  tests,
  timeZone,
  nowMs,
  onOpen,
}: {
  tests: readonly Test[];
  timeZone: string;
  nowMs: number;
  onOpen?: (test: Test) => void;
}) {
  const when = (test: Test) => formatNear(test.at, timeZone, nowMs);
  return (
    <Table
      caption="Tests"
      hideCaption
      rows={tests}
      rowKey={(test) => test.id}
      onOpen={onOpen}
      openName={(test) => `${when(test)}: open ${quantityNames[test.quantity]} ${resultWords(test)}`}
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
        { key: 'by', title: 'By', cell: (test) => test.by },
        { key: 'note', title: 'Note', cell: (test) => test.note },
      ]}
    />
  );
}
