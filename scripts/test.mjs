import { existsSync, readFileSync, rmSync } from 'node:fs';
import { ensureDebianPackages } from './setup/debian-packages.mjs';
import { ensureInstalled } from './setup/install.mjs';
import { run } from './setup/run.mjs';

/**
 * `npm test`: installs what is missing, then runs every check and every test, and closes with one line,
 * `N passed, N failed`. A check that is not a test runner (lint, types, ...) counts as one test.
 */
await ensureInstalled();
await ensureDebianPackages();

let passed = 0;
let failed = 0;

async function check(name, command, args) {
  console.log(`\n== ${name}`);
  try {
    await run(command, args);
    passed += 1;
  } catch (error) {
    console.error(`${name}: ${error.message}`);
    failed += 1;
  }
}

async function suite(name, projects) {
  console.log(`\n== ${name}`);
  const results = `node_modules/.steadfall-${projects.join('-')}.json`;
  rmSync(results, { force: true });
  const selected = projects.flatMap((project) => ['--project', project]);
  let failure;
  try {
    await run('node_modules/.bin/vitest', ['run', ...selected, '--reporter=default', '--reporter=json', `--outputFile.json=${results}`]);
  } catch (error) {
    failure = error;
  }
  const counts = existsSync(results) ? JSON.parse(readFileSync(results, 'utf8')) : { numPassedTests: 0, numFailedTests: 0 };
  passed += counts.numPassedTests;
  failed += counts.numFailedTests;
  // A file that does not load, or an error outside any test, fails the run without failing a test.
  if ((failure !== undefined && counts.numFailedTests === 0) || counts.numPassedTests === 0) {
    console.error(`${name}: ${failure?.message ?? 'no test ran'}`);
    failed += 1;
  }
}

const npm = (script) => ['run', '--silent', script];
await check('Format', 'npm', npm('format:check'));
await check('Lint', 'npm', npm('lint'));
await check('Import boundaries', 'npm', npm('boundaries'));
await check('Types', 'npm', npm('typecheck'));
await check('Unused code and packages', 'npm', npm('unused'));
await suite('Unit, published values, API, MQTT, systems', ['node', 'client', 'dom']);
await check('Web build', process.execPath, ['scripts/setup/build-web-main.mjs']);
await suite('Journeys in the browser', ['e2e']);

console.log(`\n${passed} passed, ${failed} failed`);
process.exitCode = failed === 0 ? 0 : 1;
