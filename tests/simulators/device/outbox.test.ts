import { appendFileSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { fileOutbox, memoryOutbox, type Outbox } from '../../../simulators/device/outbox.ts';

const message = (payload: string) => ({ word: 'run' as const, payload });

describe('an outbox', () => {
  let folder: string;
  beforeEach(() => (folder = mkdtempSync(path.join(tmpdir(), 'steadfall-outbox-'))));
  afterEach(() => rmSync(folder, { recursive: true, force: true }));

  const kinds: [string, () => Outbox][] = [
    ['in memory', () => memoryOutbox()],
    ['in a file', () => fileOutbox(folder, 'outbox.jsonl')],
  ];
  it.each(kinds)('%s gives its messages in the order in which they came', (_kind, open) => {
    const outbox = open();
    for (let count = 0; count < 3_000; count += 1) outbox.push(message(String(count)));
    for (let count = 0; count < 2_500; count += 1) outbox.acknowledgeOldest();
    expect([outbox.at(0)?.payload, outbox.at(499)?.payload, outbox.at(500)]).toEqual(['2500', '2999', undefined]);
    expect(outbox.length).toBe(500);
    outbox.close();
  });

  it('in a file is there again after a power cut', () => {
    const before = fileOutbox(folder, 'outbox.jsonl');
    before.push(message('a'));
    before.push(message('b'));
    const after = fileOutbox(folder, 'outbox.jsonl');
    expect([after.at(0), after.at(1)]).toEqual([message('a'), message('b')]);
  });

  it('in a file forgets what was acknowledged once all of it is', () => {
    const outbox = fileOutbox(folder, 'outbox.jsonl');
    outbox.push(message('a'));
    outbox.acknowledgeOldest();
    expect(readFileSync(path.join(folder, 'outbox.jsonl'), 'utf8')).toBe('');
    outbox.push(message('b'));
    outbox.close();
    expect(fileOutbox(folder, 'outbox.jsonl').at(0)).toEqual(message('b'));
  });

  it('in a file does without a last line that the power cut off', () => {
    fileOutbox(folder, 'outbox.jsonl').push(message('a'));
    appendFileSync(path.join(folder, 'outbox.jsonl'), '{"word":"ru');
    const outbox = fileOutbox(folder, 'outbox.jsonl');
    expect(outbox.length).toBe(1);
    outbox.push(message('b'));
    outbox.close();
    expect(fileOutbox(folder, 'outbox.jsonl').length).toBe(2);
  });
});
