import { mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import path from 'node:path';

/** Keeps one JSON value through a power cut: written beside and renamed over, so that a reader finds the old or the new one whole. */
export interface StateFile {
  /** What was kept; undefined when nothing was. */
  load(): unknown;
  save(value: unknown): void;
}

export function stateFile(folder: string, name: string): StateFile {
  const file = path.join(folder, name);
  return {
    load() {
      try {
        return JSON.parse(readFileSync(file, 'utf8'));
      } catch (error) {
        if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return undefined;
        throw error;
      }
    },
    save(value) {
      mkdirSync(folder, { recursive: true, mode: 0o700 });
      writeFileSync(`${file}.new`, JSON.stringify(value), { mode: 0o600 });
      renameSync(`${file}.new`, file);
    },
  };
}
