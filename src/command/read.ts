import type { LogReading } from '../log/read.ts';
import { responseOf } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import { type Reading, readTrial } from '../trial/reading.ts';
import type { Verdict } from '../trial/verdict.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { figuresDocument } from './documents.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { unusable, wrongUse } from './failure.ts';
import { addLogOptions, columnsDocument, type LogOptions, readOptionsOf } from './log-options.ts';
import { wholeNumber } from './numbers.ts';
import { openLog } from './open-log.ts';
import { plainProfile, unitlessText } from './plain-profile.ts';
import { type ReadMove, type ReadPage, readText } from './read-page.ts';

interface ReadCommandOptions extends LogOptions {
  readonly profile?: string;
  readonly move?: number;
}

export const definition: CommandDefinition = {
  examples: [
    { line: 'holdfast read lift-03.csv', does: 'figures, what is wrong, and a chart of each move' },
    { line: 'holdfast read lift-03.csv --profile lift', does: 'the same, against the target of a profile' },
    {
      line: 'holdfast read wheel.csv --column measured=rpm_filtered --unit rpm',
      does: 'when a column was guessed wrongly',
    },
    { line: 'holdfast --json read lift-03.csv', does: 'the same as one JSON document' },
  ],
  define: (command, runner) => {
    addLogOptions(
      command
        .argument('<log>', 'a trial log: CSV of any kind, JSON Lines, plain or gzip; - for standard input')
        .option('--profile <profile>', 'the mechanism it was logged on: its units, target and limits')
        .option('--move <n>', 'show this move only, of a log with many', wholeNumber),
    ).action((file: string, options: ReadCommandOptions) => runner((context) => read(file, options, context)));
  },
};

/** What the log was read as: its profile, whose texts may lack a unit, and what was assumed. */
type Basis = Pick<ReadPage, 'profile' | 'own' | 'say' | 'assumed'>;

async function read(file: string, options: ReadCommandOptions, context: CommandContext): Promise<ExitCode> {
  const given = options.profile === undefined ? null : await profileNamed(options.profile, context);
  const log = await openLog(file, readOptionsOf(options, given, 'needed'), context);
  if (log.moves.length === 0) {
    throw unusable(
      'no move was found in it: the setpoint never changes, and the reading starts on it.',
      'Log from just before the setpoint moves until it has settled; or name the right setpoint with --column setpoint=HEADER.',
      { file: log.file },
    );
  }
  const basis = basisOf(log, given, options);
  const nameplate = given === null ? null : responseOf(given);
  const moves = log.moves.map((move): ReadMove => {
    const reading = readTrial(move.samples, {
      profile: basis.profile,
      gains: null,
      move: { from: move.from, to: move.to },
      outputCap: basis.profile.limits.outputCap,
      response: null,
      reach: null,
      nameplate,
      promise: null,
    });
    return { move, reading: basis.own ? reading : withoutTarget(reading, basis.profile) };
  });
  checkMove(options.move, moves.length);
  present(context, {
    json: () => readDocument(log, moves, basis),
    text: () => readText({ log, moves, ...basis }, options.move ?? null, context),
  });
  const settled = moves.every(({ reading }) => (basis.own ? reading.meets : reading.figures.settlingTime !== null));
  return settled ? EXIT.done : EXIT.answerIsNo;
}

function checkMove(move: number | undefined, count: number): void {
  if (move === undefined || (move >= 1 && move <= count)) return;
  throw wrongUse(`--move ${move}: the log holds ${count} ${count === 1 ? 'move' : 'moves'}.`, 'Moves count from 1.');
}

async function profileNamed(name: string, context: CommandContext): Promise<Profile> {
  const { findProfile } = await import('./find-profile.ts');
  return (await findProfile(name, context)).profile;
}

function basisOf(log: LogReading, given: Profile | null, options: ReadCommandOptions): Basis {
  if (given !== null) return { profile: given, own: true, say: (text) => text, assumed: [] };
  const { profile, unitNamed, assumed } = plainProfile(log, options.unit ?? null, options.outputUnit ?? null);
  return { profile, own: false, say: unitNamed ? (text) => text : unitlessText, assumed };
}

/** Without a profile there is no settling time to meet: the sentence that would name one is said without it. */
function withoutTarget(reading: Reading, profile: Profile): Reading {
  const { settlingTime } = reading.figures;
  const said = (verdict: Verdict): Verdict =>
    verdict.is === 'settled' && settlingTime !== null
      ? {
          ...verdict,
          because: `Settled within ${formatQuantity(profile.target.tolerance, profile.unit)} after ${formatNumber(settlingTime, 2)} s.`,
        }
      : verdict;
  return { ...reading, verdicts: reading.verdicts.map(said) };
}

/** `holdfast/read-result@1`; contracts, section 5. */
function readDocument(log: LogReading, moves: readonly ReadMove[], basis: Basis): Readonly<Record<string, unknown>> {
  return {
    format: 'holdfast/read-result@1',
    file: log.file,
    rows: log.rows,
    duration: log.duration,
    period: log.period,
    columns: columnsDocument(log.columns),
    moves: moves.map(({ move, reading }) => ({
      start: log.samples.time[move.start] ?? 0,
      end: log.samples.time[move.end - 1] ?? 0,
      from: move.from,
      to: move.to,
      figures: figuresDocument(reading.figures),
      verdict: reading.verdicts.map(({ is, because }) => ({ is, because: basis.say(because) })),
    })),
    repairs: log.repairs,
    warnings: [...log.warnings, ...basis.assumed],
  };
}
