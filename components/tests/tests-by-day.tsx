import type { Test } from '#shared/contract/records.ts';
import { formatClock } from '../../lib/format/time.ts';
import { Heading } from '../ui/heading.tsx';
import { placeWords, testWords } from './result-words.ts';
import { testDays } from './test-days.ts';
import './tests.css';

/** The tests of a phone: day by day, one row each. A row that may be corrected is a button. */
export function TestsByDay({
  tests,
  timeZone,
  nowMs,
  mayOpen,
  onOpen,
}: {
  tests: readonly Test[];
  timeZone: string;
  nowMs: number;
  mayOpen: (test: Test) => boolean;
  onOpen: (test: Test) => void;
}) {
  return (
    <div className="test-days">
      {testDays(tests, timeZone, nowMs).map(({ day, title, tests: ofDay }) => (
        <section key={day} aria-labelledby={`tests-${day}`}>
          <Heading level={2} variant="label" id={`tests-${day}`}>
            {title}
          </Heading>
          <ul className="test-rows">
            {ofDay.map((test) => (
              <li key={test.id}>
                {mayOpen(test) ? (
                  <button type="button" className="test-row test-row-button" onClick={() => onOpen(test)}>
                    <RowText test={test} timeZone={timeZone} />
                  </button>
                ) : (
                  <div className="test-row">
                    <RowText test={test} timeZone={timeZone} />
                  </div>
                )}
              </li>
            ))}
          </ul>
        </section>
      ))}
    </div>
  );
}

function RowText({ test, timeZone }: { test: Test; timeZone: string }) {
  return (
    <>
      <span className="test-row-line">
        <span className="test-row-result">{testWords(test)}</span>{' '}
        <span className="test-row-place">
          {placeWords(test) ?? ''} <span className="test-row-time">{formatClock(test.at, timeZone)}</span>
        </span>
      </span>{' '}
      {test.note === '' ? null : <span className="test-row-note">{test.note}</span>}
    </>
  );
}
