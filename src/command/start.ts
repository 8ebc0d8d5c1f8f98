import type { ExitCode } from './edge.ts';
import { processEdge } from './process-edge.ts';
import type { OpenConsole } from './program.ts';

/** Runs this process's command line on the real world, or opens the console; resolves to the exit code. */
export async function start(words: readonly string[], openConsole: OpenConsole): Promise<ExitCode> {
  const { runProgram } = await import('./program.ts');
  return runProgram(words, processEdge(), openConsole);
}
