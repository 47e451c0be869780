import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { ApiError, type ApiProblem } from '../../lib/api-problem.ts';
import { createOutbox, type OutboxStorage } from '../../lib/outbox.ts';

function memoryStorage(): OutboxStorage {
  const kept = new Map<string, string>();
  return { getItem: (key) => kept.get(key) ?? null, setItem: (key, value) => void kept.set(key, value) };
}

const systemId = '0190a000-0000-7000-8000-000000000001';
const testEntry = (id: string) => ({
  id,
  systemId,
  name: 'createTest' as const,
  options: {
    params: { systemId },
    body: { id, at: '2026-03-08T14:00:00Z', quantity: 'nitrate' as const, value: 12, unit: 'mg/L NO3' as const },
  },
});
const no = (problem: ApiProblem) => () => Promise.reject(new ApiError(problem));
const unreachable = no({ kind: 'unreachable' });
const first = '0190a000-0000-7000-8000-00000000000a';
const second = '0190a000-0000-7000-8000-00000000000b';

let send: ReturnType<typeof vi.fn<(name: string, options: unknown) => Promise<unknown>>>;
let sent: string[];
let userId: string | null;

function open(storage: OutboxStorage) {
  let queue: Promise<unknown> = Promise.resolve();
  return createOutbox({
    storage,
    send: (name, options) => send(name, options) as never,
    lock: (work) => {
      const next = queue.then(work);
      queue = next.catch(() => undefined);
      return next;
    },
    userId: () => userId,
    nowMs: () => 5000,
    random: () => 0,
    onSent: (entry) => sent.push(entry.id),
  });
}

beforeEach(() => {
  vi.useFakeTimers();
  send = vi.fn<(name: string, options: unknown) => Promise<unknown>>(() => Promise.resolve({ fine: true }));
  sent = [];
  userId = 'person';
});
afterEach(() => vi.useRealTimers());

describe('the outbox', () => {
  it('sends at once when there is a network, and keeps nothing', async () => {
    const outbox = open(memoryStorage());
    expect(await outbox.submit(testEntry(first))).toEqual({ state: 'saved', answer: { fine: true } });
    expect(outbox.get()).toEqual([]);
    expect(sent).toEqual([first]);
  });

  it('keeps what has no network, also through a reload, and sends it once when it is back', async () => {
    const storage = memoryStorage();
    send.mockImplementation(unreachable);
    expect(await open(storage).submit(testEntry(first))).toEqual({ state: 'waiting' });

    const reloaded = open(storage);
    expect(reloaded.get().map((entry) => entry.id)).toEqual([first]);
    send.mockClear();
    send.mockImplementation(() => Promise.resolve({}));
    await Promise.all([reloaded.flush(), reloaded.flush()]);
    expect(send).toHaveBeenCalledTimes(1);
    expect(send.mock.calls[0]?.[1]).toEqual(testEntry(first).options);
    expect(reloaded.get()).toEqual([]);
  });

  it('is sent by one of two tabs only', async () => {
    const storage = memoryStorage();
    send.mockImplementation(unreachable);
    await open(storage).submit(testEntry(first));
    send.mockClear();
    send.mockImplementation(() => Promise.resolve({}));
    const [one, other] = [open(storage), open(storage)];
    await one.flush();
    await other.flush();
    expect(send).toHaveBeenCalledTimes(1);
  });

  it('tries again by itself after a while', async () => {
    const outbox = open(memoryStorage());
    send.mockImplementationOnce(unreachable);
    await outbox.submit(testEntry(first));
    await vi.advanceTimersByTimeAsync(1000);
    expect(sent).toEqual([first]);
  });

  it('keeps the order of writing, and stops at the first that gets no answer', async () => {
    const outbox = open(memoryStorage());
    send.mockImplementation(unreachable);
    await outbox.submit(testEntry(first));
    await outbox.submit(testEntry(second));
    send.mockClear();
    await outbox.flush();
    expect(send).toHaveBeenCalledTimes(1);
    send.mockImplementation(() => Promise.resolve({}));
    await outbox.flush();
    expect(sent).toEqual([first, second]);
  });

  it('hands a refusal to the form that is still open, and keeps nothing', async () => {
    const outbox = open(memoryStorage());
    send.mockImplementation(no({ kind: 'bad-input', detail: 'Too high.', errors: [] }));
    await expect(outbox.submit(testEntry(first))).rejects.toThrow('Too high.');
    expect(outbox.get()).toEqual([]);
  });

  it('keeps what is refused later, with the reason, and does not send it again', async () => {
    const outbox = open(memoryStorage());
    send.mockImplementationOnce(unreachable);
    await outbox.submit(testEntry(first));
    send.mockImplementation(no({ kind: 'conflict', detail: 'Another body has this id.' }));
    await outbox.flush();
    await outbox.flush();
    expect(outbox.get()[0]?.refused).toBe('Another body has this id.');
    expect(send).toHaveBeenCalledTimes(2);
    outbox.discard(first);
    expect(outbox.get()).toEqual([]);
  });

  it('takes the deletion of what is gone for done', async () => {
    const outbox = open(memoryStorage());
    send.mockImplementationOnce(unreachable);
    await outbox.submit({ id: first, systemId, name: 'deleteTest', options: { params: { testId: second } } });
    send.mockImplementation(no({ kind: 'not-found', detail: '' }));
    await outbox.flush();
    expect(outbox.get()).toEqual([]);
  });

  it('never sends what another person wrote', async () => {
    const storage = memoryStorage();
    send.mockImplementation(unreachable);
    await open(storage).submit(testEntry(first));
    userId = 'somebody else';
    send.mockClear();
    const other = open(storage);
    await other.flush();
    expect(send).not.toHaveBeenCalled();
    expect(other.get()).toHaveLength(1);
  });
});
