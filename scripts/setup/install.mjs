import { createHash } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { run } from './run.mjs';

const stamp = 'node_modules/.steadfall-installed';

/** Installs what package-lock.json asks for, unless that very lock was installed before. */
export async function ensureInstalled() {
  const lock = createHash('sha256').update(readFileSync('package-lock.json')).digest('hex');
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === lock) return;
  console.log('Installing packages (about 4 minutes the first time)...');
  await run('npm', ['ci', '--no-audit', '--no-fund']);
  writeFileSync(stamp, lock);
}
