import { drawChart } from '../chart/draw.ts';
import { promiseChart } from '../chart/trial-chart.ts';
import { rehearsalDuration } from '../coach/aim.ts';
import { knownResponses } from '../coach/draws.ts';
import type { Gains } from '../controller/settings.ts';
import { learn } from '../learn/learn.ts';
import type { LearntModel } from '../learn/learnt.ts';
import { predict } from '../learn/predict.ts';
import { priorOf } from '../learn/prior.ts';
import type { Margins } from '../margin/margins.ts';
import { marginsOf, worstMargins } from '../margin/of-response.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Band } from '../record/band.ts';
import { moveText } from '../report/amounts.ts';
import { gainsLine } from '../report/gains.ts';
import { marginsText } from '../report/margins.ts';
import { hanging, heading, set } from '../report/page.ts';
import { verdictLines } from '../report/verdicts.ts';
import { capWords } from '../safety/readback.ts';
import { readTrial } from '../trial/reading.ts';
import type { Verdict } from '../trial/verdict.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { marginsDocument } from './documents.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { expectedFigures, expectedLines, type FigureSpread, rehearse } from './expected.ts';
import { unusable, wrongUse } from './failure.ts';
import { findProfile } from './find-profile.ts';
import { addLogOptions, type LogOptions, readOptionsOf } from './log-options.ts';
import { openLog } from './open-log.ts';
import { withProgress } from './progress.ts';
import { CHART_ROWS } from './trial-page.ts';
import { addGainOptions, gainsTyped, type TypedGains } from './typed-gains.ts';

interface PredictOptions extends LogOptions, TypedGains {
  readonly move?: Move;
  readonly log?: readonly string[];
}

export const definition: CommandDefinition = {
  examples: [
    {
      line: 'holdfast predict lift --kp 8 --hold 0.05',
      does: 'the response to expect of these gains, and its margins',
    },
    { line: 'holdfast predict lift --kp 8 --kd 0.2 --move 0.2:0.9', does: 'of another move' },
    { line: 'holdfast predict lift --kp 8 --log lift-03.csv', does: 'from what a log taught instead of the nameplate' },
  ],
  define: (command, runner) => {
    addLogOptions(
      addGainOptions(command.argument('<profile>', 'a name in the profiles folder, a path, or a starter'))
        .option('--move <from:to>', 'the move, in the profile’s unit; else the target’s first', moveOf)
        .option('--log <log...>', 'learn the mechanism from these logs first'),
    ).action((name: string, options: PredictOptions) => runner((context) => predictResponse(name, options, context)));
  },
};

function moveOf(text: string): Move {
  const [from, to, ...more] = text.split(':').map(Number);
  if (from === undefined || to === undefined || more.length > 0 || !Number.isFinite(from - to) || from === to) {
    throw wrongUse(`--move ${text}: this is no move.`, 'Write FROM:TO in the profile’s unit, such as 0.2:0.9.');
  }
  return { from, to };
}

interface Predicted {
  readonly profile: Profile;
  readonly gains: Gains;
  readonly move: Move;
  readonly band: Band;
  readonly figures: FigureSpread;
  readonly margins: Margins;
  readonly worst: Margins | null;
  /** What the best estimate's own response would be called. */
  readonly verdicts: readonly Verdict[];
  readonly from: string;
}

/** The response to expect of a set of gains, with its band, figures and margins. */
async function predictResponse(name: string, options: PredictOptions, context: CommandContext): Promise<ExitCode> {
  const { profile } = await findProfile(name, context);
  const gains = gainsTyped(options, profile);
  const move = options.move ?? firstMove(profile);
  const seed = context.seed ?? 1;
  const learnt = options.log === undefined ? null : await learntFrom(options.log, options, profile, seed, context);
  const responses = knownResponses(learnt, priorOf(profile), seed);
  if (responses === null) {
    throw unusable(
      `nothing is known of the machine of "${profile.name}", so nothing can be predicted.`,
      'Fill in motor, drive and load, or learn from a log with --log FILE.',
      { file: `${profile.name}.json`, field: 'motor' },
    );
  }
  const best = learnt?.response ?? priorOf(profile).response;
  const result = predictedOf(profile, gains, move, best, responses, learnt, seed);
  present(context, {
    json: () => predictDocument(result),
    text: () => predictText(result, context),
  });
  return EXIT.done;
}

function firstMove(profile: Profile): Move {
  const [first] = profile.target.moves;
  if (!first) throw wrongUse(`The target of "${profile.name}" names no move.`, 'Give one with --move FROM:TO.');
  return { from: first[0], to: first[1] };
}

async function learntFrom(
  files: readonly string[],
  options: LogOptions,
  profile: Profile,
  seed: number,
  context: CommandContext,
): Promise<LearntModel> {
  const logs = await Promise.all(
    files.map((file) => openLog(file, readOptionsOf(options, profile, 'optional'), context)),
  );
  const trials = logs.map(({ samples }) => ({ samples, gains: null, outputCap: profile.limits.outputCap, move: null }));
  const learnt = await withProgress('Learning from the logs', context.edge, () =>
    learn({ profile, trials, draws: 64, seed }),
  );
  for (const warning of learnt.warnings) context.edge.err(`${warning}\n`);
  if (!learnt.usable) {
    throw unusable('these logs do not carry a model to predict from.', 'Look at them with: holdfast fit LOG', {
      file: files[0] ?? null,
    });
  }
  return learnt;
}

function predictedOf(
  profile: Profile,
  gains: Gains,
  move: Move,
  best: ResponseModel,
  responses: readonly ResponseModel[],
  learnt: LearntModel | null,
  seed: number,
): Predicted {
  const duration = rehearsalDuration(profile);
  const { outputCap } = profile.limits;
  const residual = learnt?.residual ?? 0;
  const { band } = predict({ profile, draws: responses, residual, gains, move, duration, outputCap, seed });
  const loop = (response: ResponseModel) => ({
    response,
    quantity: profile.quantity,
    gains,
    settings: profile.controller,
    sensorDelay: profile.sensor?.delay ?? 0,
  });
  const trial = { gains, move, duration, outputCap };
  const verdicts = readTrial(rehearse(profile, best, trial, seed), {
    profile,
    gains,
    move,
    outputCap,
    response: best,
    reach: null,
    nameplate: null,
    promise: null,
  }).verdicts;
  return {
    profile,
    gains,
    move,
    band,
    verdicts,
    figures: expectedFigures(profile, best, responses, trial, seed),
    margins: marginsOf(loop(best)),
    worst: worstMargins(responses.map(loop)),
    from: learnt === null ? 'the nameplate' : 'the logs',
  };
}

/** `holdfast/predict-result@1`; contracts, section 5. */
function predictDocument({ gains, figures, margins, band }: Predicted): Readonly<Record<string, unknown>> {
  return {
    format: 'holdfast/predict-result@1',
    gains,
    figures,
    margins: marginsDocument(margins),
    time: Array.from(band.time),
    band: { low: Array.from(band.low), middle: Array.from(band.middle), high: Array.from(band.high) },
  };
}

function predictText(result: Predicted, page: CommandContext): string {
  const { profile, gains, move, band, worst } = result;
  const chart = promiseChart(band, {
    title: 'the response to expect, nine times in ten',
    unit: profile.unit,
    band: null,
    tolerance: profile.target.tolerance,
    to: move.to,
    width: page.width,
    height: CHART_ROWS,
    span: null,
  });
  const [settles] = result.figures.settlingTime;
  const answer =
    settles === null
      ? 'It is not expected to settle.'
      : `It should settle in ${formatNumber(settles, 2)} s; the target is ${formatNumber(profile.target.settlingTime, 2)} s.`;
  const cap = capWords(profile.limits.outputCap, profile);
  const lines = [
    `${profile.title}: ${answer}`,
    '',
    ...hanging('Gains', gainsLine(gains, profile), page),
    ...hanging('Move', `${moveText(move, profile)}, output at most ${cap}`, page),
    ...hanging('From', `${result.from}, over ${band.time.length} ticks`, page),
    '',
    heading('Promise', page),
    ...drawChart(chart, page.style),
    '',
    ...expectedLines(result.figures, profile, page),
    '',
    verdictLines(result.verdicts, page),
    marginsText(result.margins, page),
    ...(worst === null ? [] : hanging('At worst', worstText(worst), page)),
    '',
  ];
  return set(lines, page);
}

/** The margins of the least forgiving of all that the machine may be. */
function worstText({ gain, phase, delay, spectralRadius }: Margins): string {
  if (!(spectralRadius < 1)) return 'one machine in the band swings wider and wider at these gains.';
  const said = (value: number | null, unit: string) =>
    value === null ? 'no limit' : `${formatNumber(value, 2)}${unit}`;
  return `gain × ${said(gain, '')}, phase ${said(phase, '°')}, ${said(delay === null ? null : 1000 * delay, ' ms')} of delay.`;
}
