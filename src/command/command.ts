import type { Command } from 'commander';
import type { Style } from '../chart/spec.ts';
import type { Edge, ExitCode } from './edge.ts';

/** What every command is given besides its own arguments. */
export interface CommandContext {
  readonly edge: Edge;
  /** True = one JSON document on standard output, nothing else there. */
  readonly json: boolean;
  /** Seed of everything random, where one was given. */
  readonly seed: number | null;
  /** The folder of profiles a person named; null = the usual one. */
  readonly profiles: string | null;
  readonly style: Style;
  /** Columns of a printed page. */
  readonly width: number;
}

/** A line that a person can copy, and what it does. */
export interface Example {
  readonly line: string;
  readonly does: string;
}

/** Hands a command its context and takes its exit code; `define` calls it from the action. */
export type Runner = (run: (context: CommandContext) => Promise<ExitCode>) => Promise<void>;

/** What a command's file exports: its arguments and options, laid on a bare command when it is asked for. */
export interface CommandDefinition {
  readonly examples: readonly Example[];
  readonly define: (command: Command, runner: Runner) => void;
}

/** A line of the list of commands: enough for the help page, without loading the command. */
export interface ListedCommand {
  readonly name: string;
  readonly summary: string;
  readonly load: () => Promise<CommandDefinition>;
}

/** Prints a result: for a person, or as one JSON document. */
export function present(
  context: CommandContext,
  result: { readonly json: () => unknown; readonly text: () => string },
): void {
  context.edge.out(context.json ? `${JSON.stringify(result.json(), null, 2)}\n` : result.text());
}
