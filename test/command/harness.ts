import { createHash } from 'node:crypto';
import { mkdtempSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Edge, Environment, ExitCode } from '../../src/command/edge.ts';
import { runProgram } from '../../src/command/program.ts';

/** What a command line came to. */
export interface Ran {
  readonly code: ExitCode | 'console';
  readonly out: string;
  readonly err: string;
}

export interface World {
  readonly cwd: string;
  readonly env?: Environment;
  /** A person at the terminal: answers each question, or null for Ctrl-C. */
  readonly answer?: ((question: string) => string | null) | undefined;
  /** What is piped in. */
  readonly piped?: string;
  readonly columns?: number;
  readonly now?: () => number;
  readonly interrupted?: AbortSignal;
  /** Sees each piece of standard output as it is written. */
  readonly watch?: (text: string) => void;
}

/** Runs a command line in process, with a world of its own. */
export async function holdfast(words: readonly string[], world: World): Promise<Ran> {
  let out = '';
  let err = '';
  const person = world.answer;
  const edge: Edge = {
    out: (text) => {
      out += text;
      world.watch?.(text);
    },
    err: (text) => {
      err += text;
    },
    ask: async (question) => {
      err += question;
      const answer = person?.(question) ?? null;
      err += `${answer}\n`;
      return answer;
    },
    input: async () => new TextEncoder().encode(world.piped ?? ''),
    env: world.env ?? { LANG: 'C.UTF-8' },
    cwd: world.cwd,
    terminal: {
      input: person !== undefined,
      output: person !== undefined,
      errors: person !== undefined,
      columns: world.columns ?? 80,
      rows: 24,
    },
    now: world.now ?? (() => Date.UTC(2026, 4, 2, 9, 30)),
    interrupted: world.interrupted ?? new AbortController().signal,
  };
  let opened = false;
  const code = await runProgram(words, edge, async () => {
    opened = true;
    return 0;
  });
  return { code: opened ? 'console' : code, out, err };
}

/** Runs with `--json` and hands back the one document on standard output. */
export async function holdfastJson(
  words: readonly string[],
  world: World,
): Promise<{ readonly code: Ran['code']; readonly document: Record<string, unknown>; readonly err: string }> {
  const { code, out, err } = await holdfast(['--json', ...words], world);
  return { code, document: JSON.parse(out), err };
}

export function temporaryFolder(): string {
  return mkdtempSync(join(tmpdir(), 'holdfast-test-'));
}

/** Path and digest of every file under a folder: equal only when no byte of any has changed. */
export function snapshotOf(folder: string): readonly string[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => statSync(join(folder, name)).isFile())
    .map(
      (name) =>
        `${name} ${createHash('sha256')
          .update(readFileSync(join(folder, name)))
          .digest('hex')}`,
    )
    .sort();
}

export const OUTSIDE = join(import.meta.dirname, '../fixtures/outside');

export const outsideProfile = (mechanism: string): string => join(OUTSIDE, `profiles/${mechanism}.json`);
