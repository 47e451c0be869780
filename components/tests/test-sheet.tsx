import { useState } from 'react';
import type { Test } from '#shared/contract/records.ts';
import { isAtLeast } from '#shared/domain/role.ts';
import { useMe } from '../../hooks/use-me.ts';
import { useCreateTest, useDeleteTest, useTests } from '../../hooks/use-records.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { Button } from '../ui/button.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { EditTest } from './edit-test.tsx';
import { LogTests } from './log-tests.tsx';
import { quantityNames, resultWords } from './result-words.ts';

export interface TestSheetProps {
  systemId: string;
  /** The test to correct; null for a new one. */
  testId: string | null;
  onClose: () => void;
}

/** Tests written down or corrected from another screen, in a sheet over it. */
export function TestSheet({ systemId, testId, onClose }: TestSheetProps) {
  const tests = useTests(systemId).data ?? [];
  const timeZone = useSystem(systemId).data?.timeZone ?? 'UTC';
  const [said, setSaid] = useState<string | null>(null);
  if (testId !== null) return <CorrectSheet systemId={systemId} testId={testId} tests={tests} timeZone={timeZone} onClose={onClose} />;
  return (
    <Sheet title="Write down a test" open onClose={onClose}>
      {said === null ? <LogTests systemId={systemId} timeZone={timeZone} tests={tests} onDone={setSaid} /> : <Text>{said}</Text>}
    </Sheet>
  );
}

interface CorrectSheetProps {
  systemId: string;
  testId: string;
  tests: readonly Test[];
  timeZone: string;
  onClose: () => void;
}

function CorrectSheet({ systemId, testId, tests, timeZone, onClose }: CorrectSheetProps) {
  const me = useMe().data;
  const role = useSystem(systemId).data?.role ?? 'viewer';
  const remove = useDeleteTest(systemId);
  const restore = useCreateTest(systemId);
  const [deleted, setDeleted] = useState<Test | null>(null);
  const test = tests.find((one) => one.id === testId);
  const mayCorrect = test !== undefined && (isAtLeast(role, 'keeper') || test.byId === me?.id);

  function bringBack({ id, at, quantity, value, unit, below, note }: Test): void {
    restore.mutate({ id, at, quantity, value, unit, below, note }, { onSuccess: onClose });
  }

  if (deleted !== null) {
    return (
      <Sheet title="Deleted" open onClose={onClose}>
        <Text>{`${quantityNames[deleted.quantity]} ${resultWords(deleted)} is taken out.`}</Text>
        {restore.isError ? <Notice error={restore.error} /> : null}
        <Button onPress={() => bringBack(deleted)} busy={restore.isPending}>
          Undo
        </Button>
      </Sheet>
    );
  }
  return (
    <Sheet title={test === undefined ? 'Test' : `Correct ${quantityNames[test.quantity].toLowerCase()}`} open onClose={onClose}>
      {test === undefined ? <Text>This test is not there any more.</Text> : null}
      {test !== undefined && !mayCorrect ? <Text>Only a keeper corrects what somebody else wrote down.</Text> : null}
      {remove.isError ? <Notice error={remove.error} /> : null}
      {test !== undefined && mayCorrect ? (
        <EditTest
          test={test}
          timeZone={timeZone}
          tests={tests}
          onSaved={onClose}
          onDelete={() => remove.mutate(test.id, { onSuccess: () => setDeleted(test) })}
        />
      ) : null}
    </Sheet>
  );
}
