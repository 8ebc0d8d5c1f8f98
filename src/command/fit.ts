import { basename } from 'node:path';
import { drawChart } from '../chart/draw.ts';
import type { ChartSpec, Line } from '../chart/spec.ts';
import { driveOf } from '../learn/evidence.ts';
import { learn } from '../learn/learn.ts';
import type { LearntModel, TrialEvidence } from '../learn/learnt.ts';
import { answersTo } from '../learn/output-error.ts';
import type { LogReading } from '../log/read.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { modelTable } from '../report/model.ts';
import { hanging, set, wrapped } from '../report/page.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { modelDocument } from './documents.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { addLogOptions, columnsText, type LogOptions, readOptionsOf } from './log-options.ts';
import { openLog } from './open-log.ts';
import { plainProfile, unitlessText } from './plain-profile.ts';
import { withProgress } from './progress.ts';

interface FitOptions extends LogOptions {
  readonly profile?: string;
}

export const definition: CommandDefinition = {
  examples: [
    { line: 'holdfast fit lift-03.csv --profile lift', does: 'what one log teaches of the lift' },
    { line: 'holdfast fit lift-03.csv lift-04.csv --profile lift', does: 'the same from two logs together' },
    { line: 'holdfast --json fit wheel.csv', does: 'without a profile, as one JSON document' },
  ],
  define: (command, runner) => {
    addLogOptions(
      command
        .argument('<log...>', 'trial logs of one mechanism, nothing mechanical changed between them')
        .option('--profile <profile>', 'the mechanism they were logged on'),
    ).action((files: string[], options: FitOptions) => runner((context) => fitLogs(files, options, context)));
  },
};

/** What the logs were fitted as. */
interface Fit {
  readonly logs: readonly LogReading[];
  readonly profile: Profile;
  readonly evidence: readonly TrialEvidence[];
  readonly learnt: LearntModel;
  readonly unitNamed: boolean;
  readonly warnings: readonly string[];
}

/** The response model that logs support. Exit 1 when it explains them too badly to be relied on. */
async function fitLogs(files: readonly string[], options: FitOptions, context: CommandContext): Promise<ExitCode> {
  const given = options.profile === undefined ? null : await profileNamed(options.profile, context);
  const logs: LogReading[] = [];
  for (const file of files) {
    logs.push(await openLog(file, readOptionsOf(options, given, 'optional'), context));
  }
  const [first] = logs;
  if (!first) throw new RangeError('fit needs a log');
  const plain = given === null ? plainProfile(first, options.unit ?? null, options.outputUnit ?? null) : null;
  const profile = given ?? plain?.profile;
  if (!profile) throw new RangeError('fit needs a profile');
  const evidence = logs.map(({ samples }) => ({
    samples,
    gains: null,
    outputCap: profile.limits.outputCap,
    move: null,
  }));
  const rows = logs.reduce((sum, log) => sum + log.rows, 0);
  const learnt = await withProgress(`Fitting ${rows} rows`, context.edge, () =>
    learn({ profile, trials: evidence, draws: 64, seed: context.seed ?? 1 }),
  );
  const warnings = [
    ...logs.flatMap((log) => [...log.repairs, ...log.warnings]),
    ...(plain?.assumed.slice(1) ?? []),
    ...learnt.warnings,
  ];
  const result: Fit = { logs, profile, evidence, learnt, unitNamed: plain?.unitNamed ?? true, warnings };
  present(context, {
    json: () => fitDocument(result),
    text: () => fitText(result, context),
  });
  return learnt.usable ? EXIT.done : EXIT.answerIsNo;
}

async function profileNamed(name: string, context: CommandContext): Promise<Profile> {
  const { findProfile } = await import('./find-profile.ts');
  return (await findProfile(name, context)).profile;
}

/** `holdfast/fit-result@1`; contracts, section 5. */
function fitDocument({ logs, profile, learnt, unitNamed, warnings }: Fit): Readonly<Record<string, unknown>> {
  return {
    format: 'holdfast/fit-result@1',
    logs: logs.map(({ file }) => file),
    quantity: profile.quantity,
    unit: unitNamed ? profile.unit : null,
    model: modelDocument(learnt),
    fit: learnt.fit,
    rowShift: learnt.rowShift,
    unlearnt: learnt.unlearnt,
    usable: learnt.usable,
    warnings,
  };
}

function fitText({ warnings, ...result }: Fit, page: CommandContext): string {
  const { logs, profile, learnt, unitNamed } = result;
  const say = unitNamed ? (text: string) => text : unitlessText;
  const names = logs.map(({ file }) => basename(file)).join(', ');
  const answer = learnt.usable
    ? `the model explains ${formatNumber(learnt.fit ?? 0, 3)} % of the motion.`
    : 'no model that can be relied on.';
  const [first] = logs;
  const { max, unit } = profile.controller.output;
  const lines = [
    ...wrapped(`${names}: ${answer}`, page.width),
    '',
    ...(first ? wrapped(columnsText(first), page.width) : []),
    ...warnings.flatMap((warning) => hanging('Note', warning, page)),
    '',
    `Full output is ${max} ${FULL_WORDS[unit]}.`,
    say(modelTable(learnt, profile, page)),
    ...chartLines(result, say, page),
    '',
  ];
  return set(lines, page);
}

const FULL_WORDS = { fraction: 'as a fraction', percent: '%', volts: 'V' } as const;

/** The first log's measured course with the model's answer to the same output. */
function chartLines(
  { logs, profile, evidence, learnt }: Omit<Fit, 'warnings'>,
  say: (text: string) => string,
  { width, style }: CommandContext,
): readonly string[] {
  const [first] = evidence;
  const drive = first ? driveOf(first, profile) : 'too short';
  if (typeof drive === 'string') return [];
  const answer = answersTo([drive], profile, learnt.rowShift).of(learnt.response)[0];
  if (!answer) return [];
  const { time, measured } = drive;
  const lines: readonly Line[] = [
    { name: 'measured', role: 'measured', time, value: measured },
    { name: 'the model’s answer to the same output', role: 'promise', time, value: answer },
  ];
  const unit = say(`1 ${profile.unit}`).slice(2);
  const title = `${basename(logs[0]?.file ?? '')}: measured, and the model under it`;
  const spec: ChartSpec = { title, unit, lines, width, height: 15, range: null, span: null };
  return ['', ...drawChart(spec, style)];
}
