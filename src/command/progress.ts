import type { Edge } from './edge.ts';

/**
 * Runs work that may take over a second, with a line on standard error that says what is going on; on a terminal the line is
 * taken away again when the work is done, elsewhere nothing is said.
 */
export async function withProgress<T>(what: string, edge: Edge, work: () => T): Promise<T> {
  if (!edge.terminal.errors) return work();
  edge.err(`${what} …`);
  // The line has to be on the screen before the work holds everything up.
  await new Promise((resolve) => setImmediate(resolve));
  try {
    return work();
  } finally {
    edge.err('\r\u001b[K');
  }
}
