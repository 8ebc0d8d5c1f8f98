/** The world outside as a command sees it. Injected, so that tests run commands in process with their own. */
export interface Edge {
  /** Results: what a person or a script asked for. */
  readonly out: (text: string) => void;
  /** Progress, warnings and questions. */
  readonly err: (text: string) => void;
  /** One line from the person at the keyboard, without its end; null at the end of input or on Ctrl-C. */
  readonly ask: (question: string) => Promise<string | null>;
  /** All of standard input, for a log that is piped in. */
  readonly input: () => Promise<Uint8Array>;
  readonly env: Environment;
  readonly cwd: string;
  readonly terminal: TerminalFacts;
  /** ms since the epoch. */
  readonly now: () => number;
  /** Aborted at the first Ctrl-C, SIGTERM or SIGHUP. */
  readonly interrupted: AbortSignal;
}

/** The environment variables that Holdfast listens to. */
export interface Environment {
  readonly NO_COLOR?: string | undefined;
  readonly TERM?: string | undefined;
  readonly TERM_PROGRAM?: string | undefined;
  readonly WT_SESSION?: string | undefined;
  readonly LC_ALL?: string | undefined;
  readonly LC_CTYPE?: string | undefined;
  readonly LANG?: string | undefined;
  /** 1 = show the stack of a defect. */
  readonly HOLDFAST_DEBUG?: string | undefined;
}

/** Which streams are a terminal, and how large it is. */
interface TerminalFacts {
  readonly input: boolean;
  readonly output: boolean;
  readonly errors: boolean;
  readonly columns: number;
  readonly rows: number;
}

/** Exit codes; contracts, section 5. 130 is the shell's custom for "ended by Ctrl-C". */
export const EXIT = {
  done: 0,
  answerIsNo: 1,
  wrongUse: 2,
  unusableInput: 3,
  refused: 4,
  defect: 5,
  interrupted: 130,
} as const;
export type ExitCode = (typeof EXIT)[keyof typeof EXIT];

/** Lets pending signals and writes through: long computations call it between their steps. */
export function breathe(): Promise<void> {
  return new Promise((resolve) => setImmediate(resolve));
}
