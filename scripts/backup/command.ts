import { ConfigError, readConfig } from '../../server/config.ts';
import { ArchiveError } from './archive.ts';

/** Runs `work` with the data directory and the file named on the command line; a refusal is one line and exit code 1. */
export function runArchiveCommand(name: string, work: (dataDir: string, file: string) => void, done: string): void {
  const file = process.argv[2];
  if (file === undefined) {
    console.error(`Name the file: npm run ${name} -- FILE`);
    process.exitCode = 1;
    return;
  }
  try {
    const { DATA_DIR } = readConfig(process.env);
    work(DATA_DIR, file);
    console.log(`${done} ${file}`);
  } catch (error) {
    if (!(error instanceof ArchiveError) && !(error instanceof ConfigError)) throw error;
    console.error(error.message);
    process.exitCode = 1;
  }
}
