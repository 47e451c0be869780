import { restore } from './backup/archive.ts';
import { runArchiveCommand } from './backup/command.ts';

runArchiveCommand('restore', restore, 'Restored from');
