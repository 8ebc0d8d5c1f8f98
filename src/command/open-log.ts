import { resolve } from 'node:path';
import { type LogReading, type ReadOptions, readLog, readLogBytes } from '../log/read.ts';
import type { CommandContext } from './command.ts';

/** Reads the log that a person named; `-` is standard input. @throws {LogError} */
export async function openLog(file: string, options: ReadOptions, { edge }: CommandContext): Promise<LogReading> {
  if (file === '-') return readLogBytes(await edge.input(), 'standard input', options);
  return readLog(resolve(edge.cwd, file), options);
}
