import { nextStep } from '../coach/next-step.ts';
import type { Proposal, RunReading } from '../coach/step.ts';
import type { Profile } from '../mechanism/profile.ts';
import { modelTable } from '../report/model.ts';
import { hanging, set, spelt } from '../report/page.ts';
import { outcomeText, proposalText } from '../report/proposal.ts';
import type { CommandContext, CommandDefinition } from './command.ts';
import { present } from './command.ts';
import { type KeptTrial as TuneTrial, tuneDocument } from './documents.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { Failure, refused } from './failure.ts';
import { type FoundProfile, findProfile } from './find-profile.ts';
import { historyOf, openKeeper, type RunKeeper } from './kept-run.ts';
import { positive, wholeNumber } from './numbers.ts';
import { commandPlant, fittedPlant, type PlantWish, physicsPlant, plantWish } from './plants.ts';
import { poweredAdmission } from './powered.ts';
import { type RunEnd, runTrials, type TrialPlant } from './run-trials.ts';
import { readingText } from './trial-page.ts';

interface TuneOptions {
  readonly plant: string;
  readonly plantTimeout: number;
  readonly plantIsSimulated?: true;
  readonly trials: number;
  readonly minutes?: number;
  readonly fresh?: true;
}

export const definition: CommandDefinition = {
  examples: [
    { line: 'holdfast tune lift --plant sim', does: 'the procedure on the profile’s own physics' },
    { line: 'holdfast tune lift --plant log:lift-03.csv', does: 'on a response model fitted to a log' },
    {
      line: `holdfast tune lift --plant 'cmd:./rig --port 3'`,
      does: 'on a rig driven by a command: a checklist is ticked before each trial',
    },
    {
      line: `holdfast --json tune lift --plant 'cmd:node simulator.mjs' --plant-is-simulated`,
      does: 'on a simulator of your own, as one JSON document',
    },
  ],
  define: (command, runner) => {
    command
      .argument('<profile>', 'a name in the profiles folder, a path, or a starter')
      .requiredOption('--plant <plant>', 'what answers the output: sim, log:FILE or cmd:COMMAND')
      .option('--plant-timeout <s>', 'seconds a command may take for one trial', positive, 30)
      .option('--plant-is-simulated', 'the command is a simulation: nothing moves, no checklist')
      .option('--trials <n>', 'most trials of the run', wholeNumber, 12)
      .option('--minutes <m>', 'minutes left before the next appointment', positive)
      .option('--fresh', 'start a new run even when one is open')
      .action((name: string, options: TuneOptions) => runner((context) => tune(name, options, context)));
  },
};

/** The staged procedure without a person (or, on real machinery, with one who ticks); every trial is kept. */
async function tune(name: string, options: TuneOptions, context: CommandContext): Promise<ExitCode> {
  const wish = plantWish(options.plant);
  const found = await findProfile(name, context);
  refuseStarterOnMachine(found, wish, options);
  const { profile, store } = found;
  const keeper = await openKeeper(store, profile, {
    plant: options.plant,
    seed: context.seed ?? 1,
    maxTrials: options.trials,
    event: null,
    fresh: options.fresh === true,
  });
  const { seed } = keeper.run();
  const plant = await plantOf(wish, profile, seed, options, context);
  const story = (text: string) => (context.json ? () => {} : context.edge.out)(`${spelt(text, context.style)}\n\n`);
  tellOpening(keeper, context);
  const begun = context.edge.now();
  const minutesLeft = () =>
    options.minutes === undefined ? null : options.minutes - (context.edge.now() - begun) / 60_000;
  const powered = wish.kind === 'cmd' && options.plantIsSimulated !== true;
  const end = await runTrials({
    history: historyOf(keeper, profile),
    told: keeper.run().trials.filter(({ figures }) => figures !== null).length,
    next: (history) => nextStep({ ...history, minutesLeft: minutesLeft() }),
    plant,
    admit: powered ? poweredAdmission(profile, seed, context) : async () => ({ open: true, permit: null }),
    keep: keeper.keep,
    tell: async (event) => {
      if (event.kind === 'proposed') {
        if (context.json) tellProgress(event.trial, event.proposal, context);
        story(proposalText(event.proposal, event.trial, profile, context));
      } else {
        await keeper.read(event.reading);
        story(readingText(event.record, event.reading, profile, context));
      }
    },
    interrupted: context.edge.interrupted,
  });
  return finish(end, keeper, profile, context);
}

function refuseStarterOnMachine(found: FoundProfile, wish: PlantWish, options: TuneOptions): void {
  if (found.source !== 'starter' || wish.kind !== 'cmd' || options.plantIsSimulated === true) return;
  throw refused(
    `"${found.profile.name}" is a starter: its machine, limits and hazards are invented, and no machine is powered on them.`,
    `Copy it with: holdfast new NAME --from ${found.profile.name}, and enter what your machine is.`,
  );
}

async function plantOf(
  wish: PlantWish,
  profile: Profile,
  seed: number,
  options: TuneOptions,
  context: CommandContext,
): Promise<TrialPlant> {
  switch (wish.kind) {
    case 'sim':
      return physicsPlant(profile, seed);
    case 'log':
      return fittedPlant(wish.file, profile, seed, context);
    case 'cmd': {
      const how = { timeout: options.plantTimeout, simulated: options.plantIsSimulated === true };
      return commandPlant(wish.words, profile, how, context);
    }
  }
}

function tellOpening(keeper: RunKeeper, { edge }: CommandContext): void {
  const { id, trials, seed } = keeper.run();
  if (trials.length === 0) return;
  edge.err(`Resuming ${id} after trial ${trials.length} (seed ${seed}); --fresh starts a new run.\n`);
}

function tellProgress(trial: number, { stage }: Proposal, { edge }: CommandContext): void {
  edge.err(`trial ${trial}: ${stage}\n`);
}

async function finish(end: RunEnd, keeper: RunKeeper, profile: Profile, context: CommandContext): Promise<ExitCode> {
  const count = end.history.trials.length;
  switch (end.kind) {
    case 'interrupted':
      context.edge.err(`Stopped. ${kept(count)} in ${keeper.run().id}; the same command goes on from there.\n`);
      return EXIT.interrupted;
    case 'failed':
      throw new Failure(
        end.failure.exit,
        end.failure.message,
        `${end.failure.remedy} ${kept(count)}; the same command goes on from there.`,
        end.failure.where,
      );
    case 'stopped': {
      await keeper.end(end.outcome);
      const trials = trialsOf(end.history.trials, end.reading, keeper);
      present(context, {
        json: () => tuneDocument(profile.name, end.outcome, trials, end.reading.learnt),
        text: () => `${endText(end, keeper, profile, context)}\n`,
      });
      return end.outcome.met ? EXIT.done : EXIT.answerIsNo;
    }
  }
}

/** The end of a run on paper: gains, reasons, what was learnt, where the logs are, what to do next. */
function endText(
  end: RunEnd & { readonly kind: 'stopped' },
  keeper: RunKeeper,
  profile: Profile,
  page: CommandContext,
): string {
  const { learnt } = end.reading;
  const lines = [
    outcomeText(end.outcome, end.history.trials.length, profile, page),
    '',
    ...(learnt === null ? [] : ['What the trials taught', modelTable(learnt, profile, page), '']),
    ...hanging('Logs', keeper.folder, page),
    ...hanging('Next', nextText(end, keeper.run().plant, profile), page),
  ];
  return set(lines, page);
}

function nextText(end: RunEnd & { readonly kind: 'stopped' }, plant: string, profile: Profile): string {
  if (!end.outcome.met) return 'Mend what is named above, then run the same command again.';
  if (plant.startsWith('cmd:'))
    return `Enter the gains on the robot and in the profile; holdfast gains ${profile.name} writes them in another form.`;
  const on = plant === 'sim' ? 'the profile’s physics' : 'a model of the log';
  return `These gains are proven on ${on} only. On the machine they are where to start: holdfast checklist ${profile.name}`;
}

const kept = (count: number) => (count === 1 ? '1 trial is kept' : `${count} trials are kept`);

function trialsOf(records: RunEnd['history']['trials'], reading: RunReading, keeper: RunKeeper): readonly TuneTrial[] {
  return records.flatMap((record) => {
    const read = reading.trials.find(({ trial }) => trial === record.trial);
    return read ? [{ record, reading: read, ...keeper.told(record.trial) }] : [];
  });
}
