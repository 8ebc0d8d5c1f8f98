import type { CoachStep, Outcome, Proposal, RunHistory, RunReading, TrialReading, TrialRecord } from '../coach/step.ts';
import type { Samples } from '../record/samples.ts';
import type { Permit } from '../safety/gate.ts';
import { breathe } from './edge.ts';
import type { Failure } from './failure.ts';

/** What answers the output: the profile's physics, a model fitted to logs, a command. */
export interface TrialPlant {
  readonly run: (proposal: Proposal, trial: number, permit: Permit | null) => Promise<PlantAnswer>;
}

export type PlantAnswer =
  | { readonly kind: 'log'; readonly samples: Samples }
  | { readonly kind: 'failed'; readonly failure: Failure }
  | { readonly kind: 'interrupted' };

/** May this trial be run? Asked before each; simulated plants always may, and need no permit. */
export type Admission =
  | { readonly open: true; readonly permit: Permit | null }
  | { readonly open: false; readonly failure: Failure }
  | { readonly open: 'interrupted' };

/** What happens in a run, told as it happens. */
type RunEvent =
  | { readonly kind: 'proposed'; readonly proposal: Proposal; readonly trial: number }
  | { readonly kind: 'read'; readonly record: TrialRecord; readonly reading: TrialReading };

export interface RunTrials {
  readonly history: RunHistory;
  /** How many of its trials were told already; the others are told first. */
  readonly told: number;
  /** The coach: `nextStep` of src/coach. */
  readonly next: (history: RunHistory) => CoachStep;
  readonly plant: TrialPlant;
  readonly admit: (asked: AskedTrial) => Promise<Admission>;
  /** Keeps a trial that was run; called before anything else is done with it. */
  readonly keep: (record: TrialRecord, proposal: Proposal, permit: Permit | null) => Promise<void>;
  readonly tell: (event: RunEvent) => void | Promise<void>;
  readonly interrupted: AbortSignal;
}

/** A proposal that waits for leave, with all that it rests on. */
export interface AskedTrial {
  readonly proposal: Proposal;
  readonly trial: number;
  readonly history: RunHistory;
  readonly reading: RunReading;
}

/** How a run ended. Trials that were run are in the history and kept, however it ended. */
export type RunEnd = { readonly history: RunHistory } & (
  | { readonly kind: 'stopped'; readonly outcome: Outcome; readonly reading: RunReading }
  | { readonly kind: 'failed'; readonly failure: Failure; readonly during: Proposal }
  | { readonly kind: 'interrupted' }
);

/**
 * The whole procedure without a person: history → next step → plant → history, until the coach stops it, a plant fails
 * or a trial is refused. Interruption is seen between trials and by the plant itself; nothing that was run is lost.
 */
export async function runTrials(run: RunTrials): Promise<RunEnd> {
  let history = run.history;
  let { told } = run;
  while (true) {
    await breathe();
    if (run.interrupted.aborted) return { kind: 'interrupted', history };
    const step = run.next(history);
    const last = history.trials.at(-1);
    const reading = step.reading.trials.at(-1);
    if (last && reading && history.trials.length > told) {
      told = history.trials.length;
      await run.tell({ kind: 'read', record: last, reading });
    }
    if (step.kind === 'stop') return { kind: 'stopped', outcome: step.outcome, reading: step.reading, history };
    const { proposal } = step;
    const trial = (last?.trial ?? 0) + 1;
    await breathe();
    if (run.interrupted.aborted) return { kind: 'interrupted', history };
    await run.tell({ kind: 'proposed', proposal, trial });
    const admission = await run.admit({ proposal, trial, history, reading: step.reading });
    if (admission.open === 'interrupted') return { kind: 'interrupted', history };
    if (!admission.open) return { kind: 'failed', failure: admission.failure, during: proposal, history };
    const answer = await run.plant.run(proposal, trial, admission.permit);
    if (answer.kind === 'interrupted') return { kind: 'interrupted', history };
    if (answer.kind === 'failed') return { kind: 'failed', failure: answer.failure, during: proposal, history };
    const record = recordOf(proposal, trial, answer.samples);
    await run.keep(record, proposal, admission.permit);
    history = { ...history, trials: [...history.trials, record] };
  }
}

function recordOf(proposal: Proposal, trial: number, samples: Samples): TrialRecord {
  const { stage, gains, move, outputCap, band } = proposal;
  return { trial, stage, gains, move, outputCap, samples, band };
}
