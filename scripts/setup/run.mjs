import { spawn } from 'node:child_process';

/**
 * Runs a command with our own standard output and error, and resolves when it ends well.
 * @throws an Error that names the command when it ends otherwise.
 */
export function run(command, args, environment = {}) {
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, { stdio: ['ignore', 'inherit', 'inherit'], env: { ...process.env, ...environment } });
    child.on('error', reject);
    child.on('close', (code) => (code === 0 ? resolve() : reject(new Error(`${command} ${args.join(' ')} ended with code ${code}`))));
  });
}
