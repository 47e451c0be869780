import { closeSync, existsSync, mkdirSync, openSync, readFileSync, truncateSync, writeFileSync, writeSync } from 'node:fs';
import path from 'node:path';
import type { Uplink } from '#shared/mqtt/topics.ts';

export interface Outgoing {
  word: Uplink;
  payload: string;
}

/** What is still to be sent, oldest first. It leaves the box only once the broker has acknowledged it. */
export interface Outbox {
  push(message: Outgoing): void;
  /** The message at a place counted from the oldest; undefined past the newest. */
  at(place: number): Outgoing | undefined;
  /** Takes out the oldest. */
  acknowledgeOldest(): void;
  readonly length: number;
  close(): void;
}

export function memoryOutbox(): Outbox {
  const waiting: Outgoing[] = [];
  let first = 0;
  return {
    push: (message) => void waiting.push(message),
    at: (place) => waiting[first + place],
    acknowledgeOldest() {
      first += 1;
      // Cutting the array at every message would cost its length each time.
      if (first <= 1_000 && first < waiting.length) return;
      waiting.splice(0, first);
      first = 0;
    },
    get length() {
      return waiting.length - first;
    },
    close: () => undefined,
  };
}

/**
 * An outbox kept in a file, one message a line. The file is emptied whenever all has been acknowledged; after a power cut in
 * between, some of it is sent a second time, which the keys of samples and runs make harmless.
 */
export function fileOutbox(folder: string, name: string): Outbox {
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  const file = path.join(folder, name);
  const waiting = memoryOutbox();
  const kept = existsSync(file) ? readFileSync(file, 'utf8') : '';
  // The last line may have been cut off by the power.
  const whole = kept.slice(0, kept.lastIndexOf('\n') + 1);
  writeFileSync(file, whole, { mode: 0o600 });
  for (const line of whole.split('\n').slice(0, -1)) waiting.push(JSON.parse(line) as Outgoing);
  const handle = openSync(file, 'a');
  return {
    push(message) {
      writeSync(handle, `${JSON.stringify(message)}\n`);
      waiting.push(message);
    },
    at: (place) => waiting.at(place),
    acknowledgeOldest() {
      waiting.acknowledgeOldest();
      if (waiting.length === 0) truncateSync(file);
    },
    get length() {
      return waiting.length;
    },
    close: () => closeSync(handle),
  };
}
