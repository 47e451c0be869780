import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { promisify } from 'node:util';
import { brotliCompress, constants, gzip } from 'node:zlib';
import { run } from './run.mjs';

const sources = [
  'app',
  'assets',
  'components',
  'constants',
  'hooks',
  'lib',
  'public',
  'shared',
  'app.json',
  'babel.config.cjs',
  'metro.config.cjs',
  'package-lock.json',
  'package.json',
  'tsconfig.json',
];
const stamp = 'dist/.steadfall-sources';
const compressible = /\.(js|css|html|json|svg|wasm|webmanifest|map|txt)$/;

function* filesBelow(entry) {
  if (!existsSync(entry)) return;
  if (!statSync(entry).isDirectory()) {
    yield entry;
    return;
  }
  for (const name of readdirSync(entry).sort()) yield* filesBelow(path.join(entry, name));
}

function sourcesHash() {
  const hash = createHash('sha256');
  for (const source of sources)
    for (const file of filesBelow(source)) hash.update(file).update('\0').update(readFileSync(file)).update('\0');
  return hash.digest('hex');
}

async function compressBeside(file) {
  const bytes = readFileSync(file);
  if (bytes.length < 1024) return;
  const quality = bytes.length > 2_000_000 ? 9 : 11;
  const brotli = await promisify(brotliCompress)(bytes, { params: { [constants.BROTLI_PARAM_QUALITY]: quality } });
  writeFileSync(`${file}.br`, brotli);
  writeFileSync(`${file}.gz`, await promisify(gzip)(bytes, { level: 9 }));
}

/** Exports the web app into `dist/` with compressed copies beside each file, unless its sources are unchanged. */
export async function ensureWebBuilt() {
  const hash = sourcesHash();
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === hash) return;
  console.log('Building the web app (about 2 minutes the first time)...');
  rmSync('dist', { recursive: true, force: true });
  await run('node', ['node_modules/expo/bin/cli', 'export', '-p', 'web'], { EXPO_OFFLINE: '1', EXPO_NO_TELEMETRY: '1', CI: '1' });
  const files = [...filesBelow('dist')].filter((file) => compressible.test(file));
  await Promise.all(files.map(compressBeside));
  writeFileSync(stamp, hash);
}
