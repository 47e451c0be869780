import { useState } from 'react';
import type { Test } from '#shared/contract/records.ts';
import { isAtLeast } from '#shared/domain/role.ts';
import { useBreakpoint } from '../../hooks/use-breakpoint.ts';
import { useMe } from '../../hooks/use-me.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useCreateTest, useDeleteTest, useTests } from '../../hooks/use-records.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { UndoBar } from '../ui/undo-bar.tsx';
import { EditTest } from './edit-test.tsx';
import { LogTests } from './log-tests.tsx';
import { quantityNames, resultWords } from './result-words.ts';
import { TestsByDay } from './tests-by-day.tsx';
import { TestsTable } from './tests-table.tsx';

/** Tests by hand: write both down, look back, correct, take out with a way back. `startOpen` opens the sheet at once. */
export function TestsScreen({ systemId, startOpen = false }: { systemId: string; startOpen?: boolean }) {
  const tests = useTests(systemId);
  const system = useSystem(systemId).data;
  const me = useMe().data;
  const remove = useDeleteTest(systemId);
  const restore = useCreateTest(systemId);
  const nowMs = useNow();
  const isWide = useBreakpoint() !== 'phone';
  const [isLogging, setLogging] = useState(startOpen);
  const [opened, setOpened] = useState<Test | null>(null);
  const [deleted, setDeleted] = useState<Test | null>(null);
  const [said, setSaid] = useState('');
  useTitle('Tests', system?.name);

  const timeZone = system?.timeZone ?? 'UTC';
  const mayWrite = system !== undefined && isAtLeast(system.role, 'sitter');
  const mayCorrect = (test: Test) => mayWrite && (isAtLeast(system.role, 'keeper') || test.byId === me?.id);

  function takeOut(test: Test): void {
    setOpened(null);
    remove.mutate(test.id, { onSuccess: () => setDeleted(test) });
  }

  function bringBack(test: Test): void {
    const { id, at, quantity, value, unit, below, note } = test;
    restore.mutate({ id, at, quantity, value, unit, below, note });
    setDeleted(null);
  }

  const list = tests.data ?? [];
  return (
    <Screen
      wide
      footer={
        deleted === null ? null : (
          <UndoBar
            key={deleted.id}
            sentence={`Deleted: ${quantityNames[deleted.quantity]} ${resultWords(deleted)}.`}
            onUndo={() => bringBack(deleted)}
            onDone={() => setDeleted(null)}
          />
        )
      }
    >
      <div style={{ display: 'flex', flexWrap: 'wrap', justifyContent: 'space-between', alignItems: 'center', gap: 12 }}>
        <Heading level={1}>Tests</Heading>
        {mayWrite ? (
          <Button kind="primary" onPress={() => setLogging(true)}>
            Write down a test
          </Button>
        ) : null}
      </div>
      <div role="status">{said === '' ? null : <Text bold>{said}</Text>}</div>
      {tests.isError ? <Notice error={tests.error} onRetry={() => void tests.refetch()} /> : null}
      {remove.isError ? <Notice error={remove.error} /> : null}
      {restore.isError ? <Notice error={restore.error} /> : null}
      {tests.data === undefined && !tests.isError ? <Skeleton lines={8} name="Loading the tests" /> : null}
      {tests.data?.length === 0 ? (
        <EmptyState sentence="No test yet. Write down nitrate and phosphate of the same day: everything starts from them." />
      ) : null}
      {isWide || list.length === 0 ? null : (
        <TestsByDay tests={list} timeZone={timeZone} nowMs={nowMs} mayOpen={mayCorrect} onOpen={setOpened} />
      )}
      {!isWide || list.length === 0 ? null : (
        <TestsTable
          tests={list}
          timeZone={timeZone}
          nowMs={nowMs}
          onOpen={
            mayWrite
              ? (test) => (mayCorrect(test) ? setOpened(test) : setSaid('Only a keeper corrects what somebody else wrote down.'))
              : undefined
          }
        />
      )}
      <Sheet title="Write down a test" open={isLogging} onClose={() => setLogging(false)}>
        <LogTests
          systemId={systemId}
          timeZone={timeZone}
          tests={list}
          onDone={(sentence) => {
            setSaid(sentence);
            setLogging(false);
          }}
        />
      </Sheet>
      <Sheet
        title={opened === null ? 'Test' : `Correct ${quantityNames[opened.quantity].toLowerCase()}`}
        open={opened !== null}
        onClose={() => setOpened(null)}
      >
        {opened === null ? null : (
          <EditTest
            key={opened.id}
            test={opened}
            timeZone={timeZone}
            tests={list}
            onSaved={() => setOpened(null)}
            onDelete={() => takeOut(opened)}
          />
        )}
      </Sheet>
    </Screen>
  );
}
