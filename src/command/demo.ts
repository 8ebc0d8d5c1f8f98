import { nextStep } from '../coach/next-step.ts';
import type { TrialReading } from '../coach/step.ts';
import type { LearntModel } from '../learn/learnt.ts';
import { responseOf } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { amount, milliseconds, moveText, percent, seconds, speedText } from '../report/amounts.ts';
import { heading, type Page, set, spelt, table, wrapped } from '../report/page.ts';
import { outcomeText, proposalText } from '../report/proposal.ts';
import { simulatedMechanismOf } from '../trial/simulate.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { tuneDocument } from './documents.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { unusable } from './failure.ts';
import { findProfile } from './find-profile.ts';
import { runTrials } from './run-trials.ts';
import { simulatedPlant } from './sim-plant.ts';
import { readingText } from './trial-page.ts';

export const definition: CommandDefinition = {
  examples: [
    { line: 'holdfast demo', does: 'the guided run on a lift' },
    { line: 'holdfast demo turret --seed 7', does: 'on another starter, with another machine behind it' },
  ],
  define: (command, runner) => {
    command
      .argument('[profile]', 'a starter, a name in the profiles folder, or a path', 'lift')
      .action((name: string) => runner((context) => demo(name, context)));
  },
};

/** What the machine behind a demo differs in from its sheet, as machines do: factors, and s of delay. All invented. */
const BEHIND = { mass: 1.2, friction: 1.35, delay: 0.006 };

/** A complete guided run on a simulated mechanism; nothing is written, and the same seed tells the same story. */
async function demo(name: string, context: CommandContext): Promise<ExitCode> {
  const { profile } = await findProfile(name, context);
  const behind = machineBehind(profile);
  const mechanism = simulatedMechanismOf(behind);
  if (mechanism === null) {
    throw unusable(
      `the profile "${profile.name}" lacks numbers of the machine, so there is nothing to simulate.`,
      'Fill in motor, drive and load, or see a starter: holdfast demo lift',
      { file: `${profile.name}.json`, field: 'motor' },
    );
  }
  const seed = context.seed ?? 1;
  const story = (text: string) => {
    if (!context.json) context.edge.out(`${spelt(text, context.style)}\n\n`);
  };
  story(openingText(profile, context));
  const whys: string[] = [];
  const end = await runTrials({
    history: { profile, trials: [], maxTrials: 12, minutesLeft: null, seed },
    told: 0,
    next: nextStep,
    plant: simulatedPlant(mechanism, profile, seed),
    admit: async () => ({ open: true, permit: null }),
    keep: async (_record, proposal) => {
      whys.push(proposal.why);
    },
    tell: (event) => {
      if (event.kind === 'proposed') story(proposalText(event.proposal, event.trial, profile, context));
      else story(readingText(event.record, event.reading, profile, context));
    },
    interrupted: context.edge.interrupted,
  });
  if (end.kind === 'failed') throw end.failure;
  if (end.kind === 'interrupted') return EXIT.interrupted;
  const { outcome, reading } = end;
  const trials = end.history.trials.map((record, k) => {
    const read: TrialReading | undefined = reading.trials[k];
    return read ? [{ record, reading: read, log: null, why: whys[k] ?? '' }] : [];
  });
  present(context, {
    json: () => tuneDocument(profile.name, outcome, trials.flat(), reading.learnt),
    text: () => {
      const told = [
        outcomeText(outcome, end.history.trials.length, profile, context),
        '',
        ...comparison(profile, reading.learnt, responseOf(behind), context),
        '',
        ...closingLines(profile, context),
        '',
      ];
      return set(told, context);
    },
  });
  return outcome.met ? EXIT.done : EXIT.answerIsNo;
}

/** The machine that the demo's trials run on: the sheet's, a little heavier, stiffer and later. */
function machineBehind(profile: Profile): Profile {
  const { load, friction, sensor } = profile;
  const by = (value: number | null, factor: number) => (value === null ? null : value * factor);
  return {
    ...profile,
    load: load && { ...load, mass: by(load.mass, BEHIND.mass), inertia: by(load.inertia, BEHIND.mass) },
    friction: friction && {
      drag: by(friction.drag, BEHIND.friction),
      breakaway: by(friction.breakaway, BEHIND.friction),
    },
    sensor: sensor && {
      ...sensor,
      delay: sensor.delay + BEHIND.delay,
      noise: Math.max(sensor.noise, sensor.resolution / 4),
    },
  };
}

function openingText(profile: Profile, page: Page): string {
  const { target } = profile;
  const moves = target.moves.map(([from, to]) => moveText({ from, to }, profile)).join(' and ');
  const heavier = percent(100 * (BEHIND.mass - 1));
  const rubs = percent(100 * (BEHIND.friction - 1));
  return [
    heading(`Holdfast demo · ${profile.title}`, page),
    ...wrapped(
      `Invented and simulated: nothing moves, and nothing is written. The machine behind it is ${heavier} heavier than its sheet says and rubs ${rubs} more, as machines do; the trials have to find that out. No gain shown here is fit for a real machine.`,
      page.width,
    ),
    '',
    ...wrapped(
      `Target: within ${amount(target.tolerance, profile)}, at most ${percent(target.overshoot)} overshoot, settled in ${seconds(target.settlingTime)}, on ${moves}. Each trial below says first what it tries, why, and what to expect; then what came of it.`,
      page.width,
    ),
  ].join('\n');
}

/** The sheet, what the trials taught, and what the machine really is: side by side. */
function comparison(
  profile: Profile,
  learnt: LearntModel | null,
  truth: ResponseModel | null,
  page: Page,
): readonly string[] {
  const sheet = responseOf(profile);
  if (learnt === null || truth === null || sheet === null) return [];
  const row = (label: string, name: 'topSpeed' | 'lag' | 'drag' | 'hold', show: (value: number) => string) => {
    const { best, low, high } = learnt.intervals[name];
    return [`  ${label}`, show(sheet[name]), show(best), `${show(low)} to ${show(high)}`, show(truth[name])];
  };
  const share = (value: number) => percent(100 * value);
  const carries = profile.kind === 'lift' || profile.kind === 'arm';
  const rows = [
    ['', 'sheet', 'learnt', '95 % interval', 'true'],
    row('top speed', 'topSpeed', (value) => speedText(value, profile)),
    row('lag', 'lag', milliseconds),
    row('drag', 'drag', share),
    ...(carries ? [row('hold', 'hold', share)] : []),
  ];
  return ['What the trials found out', ...table(rows, ['left', 'right', 'right', 'left', 'left'], page)];
}

function closingLines(profile: Profile, page: Page): readonly string[] {
  const rows = [
    [`  holdfast new my-${profile.name} --from ${profile.name}`, 'a profile of your own to fill in'],
    [`  holdfast checklist ${profile.name}`, 'what is ticked before each powered trial'],
    ['  holdfast read LOG', 'what one of your own logs shows'],
  ];
  const warning = 'These gains belong to an invented mechanism: none of them is fit for a real machine.';
  return [...wrapped(warning, page.width), '', 'From here', ...table(rows, ['left', 'left'], page)];
}
