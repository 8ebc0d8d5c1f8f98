import { type ChildProcess, spawn } from 'node:child_process';

/** How a command that was started for one trial ended. */
export type ProcessEnd =
  | { readonly kind: 'exited'; readonly code: number; readonly output: Buffer; readonly said: string }
  | { readonly kind: 'killed'; readonly signal: string; readonly said: string }
  | { readonly kind: 'not-started'; readonly reason: string }
  | { readonly kind: 'timed-out'; readonly said: string }
  | { readonly kind: 'flooded'; readonly said: string }
  | { readonly kind: 'interrupted'; readonly said: string };

export interface ProcessBounds {
  readonly cwd: string;
  /** ms until the command and all that it started are ended. */
  readonly timeout: number;
  /** Bytes of standard output that are too many for one trial's log. */
  readonly mostOutput: number;
  readonly interrupted: AbortSignal;
}

/** Bytes of standard error that are kept: the end of it, where the cause usually stands. */
const MOST_SAID = 16_384;
/** ms between asking a command to end and ending it: time for a rig to drop its output. */
const GRACE = 1500;
/** ms for output to arrive after the command itself has gone. */
const DRAIN = 500;

/**
 * Starts a command without a shell, gives it `input` on standard input, and waits for its end within the bounds. The
 * command gets a process group of its own; on time-out, flood or interruption the whole group is asked to end (SIGTERM)
 * and then ended (SIGKILL), so that nothing it started lives on.
 */
export function runProcess(words: readonly string[], input: string, bounds: ProcessBounds): Promise<ProcessEnd> {
  return new Promise((resolve) => {
    const [file = '', ...rest] = words;
    const child = start(file, rest, bounds.cwd);
    const output: Buffer[] = [];
    let size = 0;
    let said = Buffer.alloc(0);
    let cut: 'timed-out' | 'flooded' | 'interrupted' | null = null;
    let timers: NodeJS.Timeout[] = [];

    const endGroup = (because: NonNullable<typeof cut>) => {
      if (cut !== null) return;
      cut = because;
      signalGroup(child, 'SIGTERM');
      timers.push(setTimeout(() => signalGroup(child, 'SIGKILL'), GRACE));
    };
    const interrupt = () => endGroup('interrupted');
    // Should this very process be ended in the middle, the command must not run on by itself.
    const leaveNothing = () => signalGroup(child, 'SIGKILL');
    process.once('exit', leaveNothing);
    const finish = (end: ProcessEnd) => {
      process.removeListener('exit', leaveNothing);
      for (const timer of timers) clearTimeout(timer);
      timers = [];
      bounds.interrupted.removeEventListener('abort', interrupt);
      resolve(end);
    };

    timers.push(setTimeout(() => endGroup('timed-out'), bounds.timeout));
    if (bounds.interrupted.aborted) interrupt();
    bounds.interrupted.addEventListener('abort', interrupt);
    child.on('error', (error) => {
      if (child.pid === undefined) finish({ kind: 'not-started', reason: error.message });
    });
    child.stdout?.on('data', (chunk: Buffer) => {
      size += chunk.length;
      if (size > bounds.mostOutput) endGroup('flooded');
      else if (cut === null) output.push(chunk);
    });
    child.stderr?.on('data', (chunk: Buffer) => {
      said = Buffer.concat([said, chunk]).subarray(-MOST_SAID);
    });
    // What it started must not outlive it; and a stray child that holds the pipes must not hold us.
    child.on('exit', () => timers.push(setTimeout(() => signalGroup(child, 'SIGKILL'), DRAIN)));
    child.on('close', (code, signal) => {
      signalGroup(child, 'SIGKILL');
      const text = said.toString('utf8');
      if (cut !== null) finish({ kind: cut, said: text });
      else if (signal !== null) finish({ kind: 'killed', signal, said: text });
      else finish({ kind: 'exited', code: code ?? -1, output: Buffer.concat(output), said: text });
    });
    // A command that never reads its request closes the pipe early: its exit says what became of it.
    child.stdin?.on('error', () => {});
    child.stdin?.end(input);
  });
}

function start(file: string, rest: readonly string[], cwd: string): ChildProcess {
  // A group of its own on POSIX; on Windows that would open a console window, and taskkill walks the tree instead.
  return spawn(file, rest, { cwd, shell: false, detached: process.platform !== 'win32', windowsHide: true });
}

function signalGroup(child: ChildProcess, signal: 'SIGTERM' | 'SIGKILL'): void {
  if (child.pid === undefined) return;
  if (process.platform === 'win32') {
    if (child.exitCode === null) spawn('taskkill', ['/T', '/F', '/PID', String(child.pid)], { windowsHide: true });
    return;
  }
  try {
    process.kill(-child.pid, signal);
  } catch {
    // The group is gone already.
  }
}

/** The last lines of what a command said, without control characters or colours: safe to print on any terminal. */
export function lastWords(said: string, lines = 8): string {
  const plain = said
    .replaceAll(/\u001b(?:\[[0-?]*[ -/]*[@-~]|\][^\u0007\u001b]*(?:\u0007|\u001b\\)?|[@-_])/g, '')
    .replaceAll(/[\u0000-\u0008\u000b-\u001f\u007f-\u009f\u202a-\u202e\u2066-\u2069]/g, '');
  const kept = plain
    .split('\n')
    .map((line) => line.trimEnd())
    .filter((line) => line !== '');
  return kept
    .slice(-lines)
    .map((line) => (line.length > 200 ? `${line.slice(0, 199)}…` : line))
    .join('\n');
}
