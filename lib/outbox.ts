import type { EndpointName } from '#shared/contract/endpoints.ts';
import { problemFrom, problemSentence, type ApiProblem } from './api-problem.ts';
import { backoffMs } from './backoff.ts';
import type { Answer, CallOptions, LooseOptions } from './request.ts';

/**
 * What may wait for the network: records of what a person saw or did. Never an order to a pump: what is sent late must not
 * dose, stop or resume anything.
 */
export const waitingCalls = [
  'createTest',
  'updateTest',
  'deleteTest',
  'createHandDose',
  'createEvent',
  'createRefill',
] as const satisfies EndpointName[];
export type WaitingCall = (typeof waitingCalls)[number];

export interface OutboxEntry {
  /** Of the record for one that is made (so that sending twice makes one), else of the entry. */
  id: string;
  userId: string;
  systemId: string;
  name: WaitingCall;
  options: Pick<LooseOptions, 'params' | 'body'>;
  writtenAtMs: number;
  /** Why the server refused it; null while it waits. */
  refused: string | null;
}

/** Where entries survive a reload: anything with the shape of `localStorage`. */
export type OutboxStorage = Pick<Storage, 'getItem' | 'setItem'>;

export interface OutboxParts {
  storage: OutboxStorage;
  send: <Name extends WaitingCall>(name: Name, options: LooseOptions) => Promise<Answer<Name>>;
  lock: <T>(work: () => Promise<T>) => Promise<T>;
  userId: () => string | null;
  nowMs: () => number;
  random: () => number;
  onSent: (entry: OutboxEntry) => void;
}

export interface ToSubmit<Name extends WaitingCall> {
  id: string;
  systemId: string;
  name: Name;
  options: CallOptions<Name>;
}

export type Submitted<Name extends WaitingCall> = { state: 'saved'; answer: Answer<Name> } | { state: 'waiting' };

const storageKey = 'steadfall.outbox';

/** Whether the same call may work later without a change: no answer, or a server that is busy. */
function mayWorkLater(problem: ApiProblem): boolean {
  return problem.kind === 'unreachable' || problem.kind === 'too-many' || problem.kind === 'server' || problem.kind === 'signed-out';
}

/** Entries written without network wait here, also through a reload, and are sent once, in the order of writing. */
export function createOutbox(parts: OutboxParts) {
  const listeners = new Set<() => void>();
  let timer: ReturnType<typeof setTimeout> | null = null;
  let attempt = 0;
  let entries = read();

  function read(): OutboxEntry[] {
    const text = parts.storage.getItem(storageKey);
    return text === null ? [] : (JSON.parse(text) as OutboxEntry[]);
  }

  function write(next: OutboxEntry[]): void {
    parts.storage.setItem(storageKey, JSON.stringify(next));
    entries = next;
    for (const listener of listeners) listener();
  }

  const keep = (entry: OutboxEntry) => write([...read().filter((other) => other.id !== entry.id), entry]);
  const drop = (id: string) => write(read().filter((other) => other.id !== id));

  async function deliver<Name extends WaitingCall>(entry: OutboxEntry & { name: Name }): Promise<Answer<Name>> {
    const answer = await parts.send(entry.name, entry.options);
    drop(entry.id);
    parts.onSent(entry);
    return answer;
  }

  /**
   * Writes the entry down first and then sends it: `waiting` when there is no network.
   * @throws {ApiError} when the server refuses it; the form still holds what was typed, so the entry is dropped.
   */
  async function submit<Name extends WaitingCall>(entry: ToSubmit<Name>): Promise<Submitted<Name>> {
    const userId = parts.userId();
    if (userId === null) throw new Error('Nobody is signed in');
    const written = { ...entry, userId, writtenAtMs: parts.nowMs(), refused: null };
    return parts.lock(async () => {
      keep(written);
      try {
        return { state: 'saved', answer: await deliver(written) };
      } catch (error) {
        if (!mayWorkLater(problemFrom(error))) {
          drop(written.id);
          throw error;
        }
        later();
        return { state: 'waiting' };
      }
    });
  }

  /** Sends what waits, of the person signed in. What the server refuses stays listed with the reason. */
  async function flush(): Promise<void> {
    await parts.lock(async () => {
      const userId = parts.userId();
      const due = read().filter((entry) => entry.refused === null && entry.userId === userId);
      for (const entry of due) {
        try {
          await deliver(entry);
        } catch (error) {
          const problem = problemFrom(error);
          if (mayWorkLater(problem)) {
            later();
            return;
          }
          // Deleting what is gone already is what was wanted.
          if (entry.name === 'deleteTest' && problem.kind === 'not-found') drop(entry.id);
          else keep({ ...entry, refused: problemSentence(problem) });
        }
      }
      attempt = 0;
    });
  }

  function later(): void {
    if (timer !== null) return;
    timer = setTimeout(
      () => {
        timer = null;
        void flush();
      },
      backoffMs(attempt, parts.random()),
    );
    attempt += 1;
  }

  return {
    get: () => entries,
    subscribe(listener: () => void) {
      listeners.add(listener);
      return () => {
        listeners.delete(listener);
      };
    },
    submit,
    flush,
    /** Gives up an entry, as its writer decided. */
    discard: (id: string) => drop(id),
    /** Another tab changed the storage. */
    reread() {
      entries = read();
      for (const listener of listeners) listener();
    },
    close() {
      if (timer !== null) clearTimeout(timer);
    },
  };
}
