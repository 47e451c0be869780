import { ConfigError, readConfig, type Config } from './config.ts';
import { greeting } from './greeting.ts';
import { startServer } from './start-server.ts';

/** How long a clean stop may take before the process ends anyway. */
const STOP_MS = 15_000;

function configOrExit(): Config {
  try {
    return readConfig(process.env);
  } catch (error) {
    if (!(error instanceof ConfigError)) throw error;
    for (const problem of error.problems) console.error(problem);
    process.exit(1);
  }
}

/** What a start most often fails on, in words that say what to do. */
function startProblem(error: unknown): string {
  if (!(error instanceof Error)) return String(error);
  if ('code' in error && error.code === 'EADDRINUSE' && 'port' in error) {
    return `Port ${String(error.port)} is in use: stop what uses it, or set PORT or MQTT_PORT to another`;
  }
  return error.stack ?? error.message;
}

const config = configOrExit();
let stopping: Promise<void> | undefined;
const starting = startServer(config, { onProgress: (line) => console.log(line) });

/** A terminal and `npm start` may both pass the same Ctrl-C on, so a signal that repeats changes nothing. */
function stop(): void {
  stopping ??= starting.then(async (server) => {
    console.log('Stopping...');
    setTimeout(() => process.exit(1), STOP_MS).unref();
    await server.close();
    process.exit(0);
  });
  stopping.catch((error: unknown) => {
    console.error(startProblem(error));
    process.exit(1);
  });
}
process.on('SIGINT', stop);
process.on('SIGTERM', stop);

try {
  const server = await starting;
  await server.ready;
  const lines = await greeting(server);
  if (stopping === undefined) for (const line of lines) console.log(line);
} catch (error) {
  console.error(startProblem(error));
  process.exit(1);
}
