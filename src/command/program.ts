import { Command, CommanderError } from 'commander';
import type { Style } from '../chart/spec.ts';
import { type Page, spelt, table, wrapped } from '../report/page.ts';
import type { CommandContext, Example, ListedCommand, Runner } from './command.ts';
import { COMMANDS } from './commands.ts';
import { type Edge, EXIT, type ExitCode } from './edge.ts';
import { explain } from './explain.ts';
import { errorDocument, errorText, wrongUse } from './failure.ts';
import { wholeNumber } from './numbers.ts';
import { pageWidth, styleOf } from './style.ts';
import { VERSION } from './version.ts';

const OPENING = `Holdfast: gains for motor-driven mechanisms, in few trials, with reasons.
The console that it opens without arguments is not built yet.`;

const EXAMPLES: readonly (readonly [line: string, does: string])[] = [
  ['holdfast demo', 'a complete guided run, simulated'],
  ['holdfast read lift-03.csv', 'what a logged trial shows'],
  ['holdfast new left-lift --from lift', 'a profile to fill in'],
  ['holdfast tune left-lift --plant sim', 'the whole procedure on its physics'],
];

const EXITS =
  'Exit codes: 0 done · 1 done, and the answer is no · 2 wrong use · 3 input that cannot be used · 4 refused for safety · 5 a defect in Holdfast · 130 ended by Ctrl-C';

interface GlobalOptions {
  readonly json?: true;
  readonly seed?: number;
  readonly profiles?: string;
  readonly ascii?: true;
  readonly colour: boolean;
}

/** What the console is opened with: the global options. */
export interface ConsoleOptions {
  readonly profiles: string | null;
  readonly style: Style;
  readonly seed: number | null;
}

export type OpenConsole = (options: ConsoleOptions) => Promise<ExitCode>;

/**
 * Runs one command line to its end, whatever happens, and tells its exit code. Every failure is told: on standard error
 * for a person, as `holdfast/error@1` on standard output with `--json`. Without a command it opens the console on a
 * terminal, and prints the help elsewhere.
 */
export async function runProgram(words: readonly string[], edge: Edge, openConsole: OpenConsole): Promise<ExitCode> {
  let exit: ExitCode = EXIT.done;
  // Help and errors are told before or without a parse: their style is read off the words.
  const style = styleOf({ ascii: words.includes('--ascii'), colour: !words.includes('--no-colour') }, edge);
  const program = programOf(edge, style, (code) => {
    exit = code;
  });
  try {
    await program.parseAsync([...words], { from: 'user' });
    return exit;
  } catch (error) {
    if (error instanceof CommanderError && error.exitCode === 0) return EXIT.done;
    if (error instanceof CommanderError && error.code === 'commander.help')
      return withoutCommand(program, edge, openConsole);
    return tell(error, words.includes('--json'), style, edge);
  }
}

async function withoutCommand(program: Command, edge: Edge, openConsole: OpenConsole): Promise<ExitCode> {
  const context = contextOf(program, edge);
  if (edge.terminal.input && edge.terminal.output && !context.json) return openConsole(context);
  if (context.json)
    return tell(wrongUse('No command was given.', 'holdfast --help lists the commands.'), true, context.style, edge);
  edge.err(spelt(program.helpInformation() + closingText(context), context.style));
  return EXIT.wrongUse;
}

function tell(error: unknown, json: boolean, style: Style, edge: Edge): ExitCode {
  const failure =
    error instanceof CommanderError
      ? wrongUse(
          error.message.replace(/^error: /, ''),
          'holdfast --help lists the commands; holdfast COMMAND --help their options.',
        )
      : explain(error);
  if (json) edge.out(`${JSON.stringify(errorDocument(failure), null, 2)}\n`);
  else edge.err(spelt(errorText(failure), style));
  if (failure.exit === EXIT.defect && edge.env.HOLDFAST_DEBUG === '1' && error instanceof Error) {
    edge.err(`${error.stack ?? error.message}\n`);
  }
  return failure.exit;
}

function programOf(edge: Edge, style: Style, done: (code: ExitCode) => void): Command {
  const program = new Command('holdfast');
  const width = pageWidth(edge);
  program
    .description(OPENING)
    .usage('[command] [options]')
    .version(VERSION, '-V, --version', 'print the version')
    .helpOption('-h, --help', 'print this page, or a command’s')
    .option('--json', 'one JSON document on standard output')
    .option('--seed <n>', 'make every simulated trial repeatable', wholeNumber)
    .option('--profiles <dir>', 'folder of profiles, trials and snapshots')
    .option('--ascii', 'plain ASCII charts and text')
    .option('--no-colour', 'no colour (NO_COLOR and TERM=dumb are honoured too)')
    .configureHelp({
      helpWidth: width,
      showGlobalOptions: true,
      visibleGlobalOptions: (command) => globalOptions(command),
    })
    .configureOutput({
      writeOut: (text) => edge.out(spelt(text, style)),
      writeErr: () => {},
      getOutHelpWidth: () => width,
    })
    .helpCommand('help [command]', 'print this page, or a command’s')
    .exitOverride()
    .addHelpText('after', closingText({ width, style }));
  for (const listed of COMMANDS) addBare(program, listed);
  program.hook('preSubcommand', async (_program, command) => {
    const listed = COMMANDS.find(({ name }) => name === command.name());
    if (!listed) return;
    const definition = await listed.load();
    const runner: Runner = async (run) => done(await run(contextOf(program, edge)));
    definition.define(command, runner);
    command.addHelpText('after', exampleText(definition.examples));
  });
  return program;
}

function addBare(program: Command, listed: ListedCommand): void {
  program.command(listed.name).description(listed.summary).allowExcessArguments(false);
}

function globalOptions(command: Command) {
  const parent = command.parent;
  return parent === null ? [] : [...parent.options].filter((option) => option.long !== '--version');
}

function contextOf(program: Command, edge: Edge): CommandContext {
  const options = program.opts<GlobalOptions>();
  return {
    edge,
    json: options.json === true,
    seed: options.seed ?? null,
    profiles: options.profiles ?? null,
    style: styleOf({ ascii: options.ascii === true, colour: options.colour }, edge),
    width: pageWidth(edge),
  };
}

function closingText(page: Page): string {
  const rows = EXAMPLES.map(([line, does]) => [`  ${line}`, does]);
  return ['', 'Examples:', ...table(rows, ['left', 'left'], page), '', ...wrapped(EXITS, page.width)].join('\n');
}

function exampleText(examples: readonly Example[]): string {
  return ['', 'Examples:', ...examples.map(({ line, does }) => `  ${line}\n      ${does}`)].join('\n');
}
