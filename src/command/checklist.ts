import { nextStep } from '../coach/next-step.ts';
import type { Proposal, RunHistory, TrialRecord } from '../coach/step.ts';
import { openRunOf } from '../profile/run.ts';
import { profileDigest } from '../profile/store.ts';
import { checklistText } from '../report/checklist.ts';
import { gainsLine } from '../report/gains.ts';
import { hanging, heading, set, spelt } from '../report/page.ts';
import type { Checklist } from '../safety/hazard.ts';
import { trialText } from './checklist-text.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { refused } from './failure.ts';
import { type FoundProfile, findProfile } from './find-profile.ts';
import { recordsOf } from './kept-run.ts';
import { dangersOf } from './planned-trial.ts';
import { fixedRefusals, gateRequest, refusal } from './powered.ts';

interface ChecklistOptions {
  readonly plant?: string;
}

export const definition: CommandDefinition = {
  examples: [
    { line: 'holdfast checklist lift', does: 'the checklist of the first powered trial of a run' },
    {
      line: `holdfast checklist lift --plant 'cmd:./rig --port 3'`,
      does: 'of the next trial of the run that is open on this rig',
    },
  ],
  define: (command, runner) => {
    command
      .argument('<profile>', 'a name in the profiles folder, a path, or a starter')
      .option('--plant <plant>', 'the plant of an open run, to see its next trial')
      .action((name: string, options: ChecklistOptions) => runner((context) => checklist(name, options, context)));
  },
};

/** The safety checklist of the next powered trial. Exit 4 when the gate would refuse it whoever ticks. */
async function checklist(name: string, options: ChecklistOptions, context: CommandContext): Promise<ExitCode> {
  const found = await findProfile(name, context);
  const { profile } = found;
  const trials = options.plant === undefined ? [] : await openTrials(found, options.plant);
  const seed = context.seed ?? 1;
  const history: RunHistory = { profile, trials, maxTrials: 12, minutesLeft: null, seed };
  const step = nextStep(history);
  if (step.kind === 'stop') throw refused(`No trial is proposed: ${step.outcome.stopped}.`, step.outcome.why);
  const { proposal, reading } = step;
  const trial = (trials.at(-1)?.trial ?? 0) + 1;
  const dangers = dangersOf(profile, reading.learnt, proposal, seed);
  const refusals = fixedRefusals(
    gateRequest(profile, { proposal, trial, history, reading }, dangers, context.edge.now()),
  );
  if (refusals.length > 0) throw refusal(trial, refusals);
  if (found.source === 'starter') {
    context.edge.err(
      spelt(`"${profile.name}" is a starter: these figures are invented, and fit no machine.\n\n`, context.style),
    );
  }
  present(context, {
    json: () => checklistDocument(dangers.checklist),
    text: () => pageText(dangers.checklist, proposal, trial, found, context),
  });
  return EXIT.done;
}

async function openTrials({ store, profile }: FoundProfile, plant: string): Promise<readonly TrialRecord[]> {
  const run = await openRunOf(store, profile.name, profileDigest(profile), plant);
  return run === null ? [] : recordsOf(run, store, profile);
}

/** `holdfast/checklist@1`; contracts, section 5. */
function checklistDocument({ profile, figures, items, abort, cautions }: Checklist): Readonly<Record<string, unknown>> {
  const { travelForward, travelBack, topSpeed, energy, coast, drop } = figures;
  return {
    format: 'holdfast/checklist@1',
    profile,
    figures: { travelForward, travelBack, topSpeed, energy, coast, drop },
    items,
    abort,
    cautions,
  };
}

function pageText(
  list: Checklist,
  proposal: Proposal,
  trial: number,
  { profile }: FoundProfile,
  page: CommandContext,
): string {
  const lines = [
    heading(`${profile.title} · checklist of trial ${trial}, ${proposal.stage}`, page),
    ...hanging('Gains', gainsLine(proposal.gains, profile), page),
    ...hanging('Move', trialText(proposal, profile), page),
    '',
    checklistText(list, profile, page),
    '',
  ];
  return set(lines, page);
}
