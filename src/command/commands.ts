import type { ListedCommand } from './command.ts';

/** Every command, in the order of the help page. A new command is a file and a line here. */
export const COMMANDS: readonly ListedCommand[] = [];
