import { execFileSync } from 'node:child_process';
import { closeSync, cpSync, existsSync, fsyncSync, mkdirSync, mkdtempSync, openSync, readdirSync, renameSync, rmSync } from 'node:fs';
import path from 'node:path';
import SqliteConnection from 'better-sqlite3';

const databaseName = 'steadfall.db';

export class ArchiveError extends Error {}

function syncToDisk(file: string): void {
  const descriptor = openSync(file, 'r');
  fsyncSync(descriptor);
  closeSync(descriptor);
}

function assertSound(databaseFile: string): void {
  const connection = new SqliteConnection(databaseFile, { readonly: true });
  try {
    const verdict = connection.pragma('integrity_check', { simple: true });
    if (verdict !== 'ok') throw new ArchiveError(`The copy of the database is damaged: ${String(verdict)}`);
  } finally {
    connection.close();
  }
}

/** Files of the data directory that go along with the database: keys, uploads, device state of the demo. */
function companions(dataDir: string): string[] {
  return readdirSync(dataDir).filter((name) => !name.startsWith(databaseName) && !name.startsWith('.backup-'));
}

/**
 * Writes one tar with a consistent copy of the database and everything beside it, also while the server runs:
 * `VACUUM INTO` reads one snapshot and blocks no writer. The tar appears under its name only once it is whole and on disk.
 * @throws {ArchiveError} when there is no database or the copy is damaged.
 */
export function backUp(dataDir: string, tarFile: string): void {
  const source = path.join(dataDir, databaseName);
  if (!existsSync(source)) throw new ArchiveError(`There is no database in ${dataDir}: set DATA_DIR to the folder that the server uses`);
  const folder = mkdtempSync(path.join(dataDir, '.backup-'));
  const partial = `${path.resolve(tarFile)}.partial`;
  try {
    const copy = path.join(folder, databaseName);
    const connection = new SqliteConnection(source, { readonly: true });
    try {
      connection.prepare('vacuum into ?').run(copy);
    } finally {
      connection.close();
    }
    assertSound(copy);
    for (const name of companions(dataDir)) cpSync(path.join(dataDir, name), path.join(folder, name), { recursive: true });
    execFileSync('tar', ['-cf', partial, '-C', folder, '.']);
    syncToDisk(partial);
    renameSync(partial, tarFile);
    syncToDisk(path.dirname(path.resolve(tarFile)));
  } finally {
    rmSync(folder, { recursive: true, force: true });
    rmSync(partial, { force: true });
  }
}

/**
 * Lays a backup into an empty or missing data directory.
 * @throws {ArchiveError} when the directory has something in it, or the tar holds no sound database.
 */
export function restore(dataDir: string, tarFile: string): void {
  if (!existsSync(tarFile)) throw new ArchiveError(`There is no file ${tarFile}`);
  if (existsSync(dataDir) && readdirSync(dataDir).length > 0) {
    throw new ArchiveError(`${dataDir} is not empty: move it away, or set DATA_DIR to a new folder`);
  }
  mkdirSync(dataDir, { recursive: true, mode: 0o700 });
  execFileSync('tar', ['-xf', path.resolve(tarFile), '-C', dataDir]);
  const database = path.join(dataDir, databaseName);
  if (!existsSync(database)) throw new ArchiveError(`${tarFile} is no backup of Steadfall: it holds no ${databaseName}`);
  assertSound(database);
  syncToDisk(database);
  syncToDisk(dataDir);
}
