import { spawn } from 'node:child_process';
import { ensureInstalled } from './setup/install.mjs';

/** `npm run dev`: the server restarts on changes, the app reloads on changes at the address that Expo prints. */
await ensureInstalled();

const server = spawn(process.execPath, ['node_modules/tsx/dist/cli.mjs', 'watch', '--clear-screen=false', 'server/main.ts'], {
  stdio: ['ignore', 'inherit', 'inherit'],
});
// Expo itself and not npx: killing npx would leave the bundler behind.
const app = spawn(process.execPath, ['node_modules/expo/bin/cli', 'start', '--web'], {
  stdio: ['inherit', 'inherit', 'inherit'],
  env: { ...process.env, EXPO_OFFLINE: '1', EXPO_NO_TELEMETRY: '1' },
});

const children = [server, app];
function stop(signal) {
  for (const child of children) child.kill(signal);
}
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => stop(signal));
for (const child of children) child.on('close', () => stop('SIGTERM'));
