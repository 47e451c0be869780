import { backUp } from './backup/archive.ts';
import { runArchiveCommand } from './backup/command.ts';

runArchiveCommand('backup', backUp, 'Backed up to');
