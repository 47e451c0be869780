import { existsSync } from 'node:fs';
import { run } from './run.mjs';

/** What the tests use of Debian: a browser, and an MQTT broker and clients by other hands. */
const wanted = [
  { file: '/usr/bin/chromium', name: 'chromium' },
  { file: '/usr/bin/mosquitto_pub', name: 'mosquitto-clients' },
  { file: '/usr/sbin/mosquitto', name: 'mosquitto' },
];

/** Installs the Debian packages that are missing, where that is permitted. */
export async function ensureDebianPackages() {
  const missing = wanted.filter((entry) => !existsSync(entry.file)).map((entry) => entry.name);
  if (missing.length === 0) return;
  if (process.getuid?.() !== 0) {
    throw new Error(`The tests need Debian's ${missing.join(', ')}: install with "sudo apt-get install ${missing.join(' ')}"`);
  }
  console.log(`Installing Debian's ${missing.join(', ')}...`);
  const environment = { DEBIAN_FRONTEND: 'noninteractive' };
  await run('apt-get', ['update', '-qq'], environment);
  await run('apt-get', ['install', '-y', '-qq', '--no-install-recommends', ...missing], environment);
}
