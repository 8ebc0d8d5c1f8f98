import { EXIT, type ExitCode } from './edge.ts';
import { processEdge } from './process-edge.ts';
import type { OpenConsole } from './program.ts';

/** Runs this process's command line on the real world, or opens the console; resolves to the exit code. */
export async function start(words: readonly string[], openConsole: OpenConsole): Promise<ExitCode> {
  const { runProgram } = await import('./program.ts');
  // Should a wait ever be for something that cannot come, say so: Node would end without a word.
  const stuck = () => {
    process.stderr.write('This is a defect in Holdfast: it waits for something that never comes.\n');
    process.exit(EXIT.defect);
  };
  process.once('beforeExit', stuck);
  const code = await runProgram(words, processEdge(), openConsole);
  process.removeListener('beforeExit', stuck);
  return code;
}
