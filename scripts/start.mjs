import { spawn } from 'node:child_process';
import { ensureWebBuilt } from './setup/build-web.mjs';
import { ensureInstalled } from './setup/install.mjs';

/** `npm start`: installs and builds what is missing, then runs the server until it is told to stop. */
await ensureInstalled();
await ensureWebBuilt();

const server = spawn(process.execPath, ['--import', 'tsx', 'server/main.ts'], { stdio: 'inherit' });
// A terminal sends Ctrl-C to the server too; a service manager signals only this process, so pass it on.
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => server.kill(signal));
server.on('close', (code, signal) => {
  process.exitCode = code ?? (signal === null ? 1 : 0);
});
