import type { Edge } from './edge.ts';

/** Width and height of a page that is not a terminal. */
const PAGE = { columns: 80, rows: 24 };

/**
 * The real world: this process's streams, environment, clock and signals.
 *
 * The first Ctrl-C (or SIGTERM, SIGHUP) asks the command to stop where nothing is lost; a second one ends the process
 * at once. A closed pipe ends it quietly: whoever read the output has seen enough.
 */
export function processEdge(): Edge {
  const stop = new AbortController();
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) {
    process.on(signal, () => {
      if (stop.signal.aborted) process.exit(130);
      stop.abort(signal);
    });
  }
  for (const stream of [process.stdout, process.stderr]) {
    stream.on('error', (error: NodeJS.ErrnoException) => {
      if (error.code === 'EPIPE') process.exit();
      throw error;
    });
  }
  return {
    out: (text) => process.stdout.write(text),
    err: (text) => process.stderr.write(text),
    ask: (question) => askOnTerminal(question, stop),
    input: async () => {
      const chunks: Buffer[] = [];
      for await (const chunk of process.stdin) chunks.push(chunk);
      return Buffer.concat(chunks);
    },
    env: process.env,
    cwd: process.cwd(),
    terminal: {
      input: process.stdin.isTTY === true,
      output: process.stdout.isTTY === true,
      errors: process.stderr.isTTY === true,
      columns: process.stdout.columns || PAGE.columns,
      rows: process.stdout.rows || PAGE.rows,
    },
    now: () => Date.now(),
    interrupted: stop.signal,
  };
}

async function askOnTerminal(question: string, stop: AbortController): Promise<string | null> {
  const { createInterface } = await import('node:readline');
  const lines = createInterface({ input: process.stdin, output: process.stderr });
  return new Promise((resolve) => {
    // A terminal in raw mode hands Ctrl-C to the line editor, not to the process: pass it on.
    lines.on('SIGINT', () => {
      stop.abort('SIGINT');
      lines.close();
    });
    lines.on('close', () => resolve(null));
    lines.question(question, (answer) => {
      resolve(answer);
      lines.close();
    });
  });
}
