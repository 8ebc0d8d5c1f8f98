import type { Proposal } from '../coach/step.ts';
import { wrapError } from '../controller/tick.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { Samples } from '../record/samples.ts';
import { type Edge, EXIT } from './edge.ts';
import { explain } from './explain.ts';
import { unusable } from './failure.ts';
import { lastWords, type ProcessEnd, runProcess } from './outside-process.ts';
import type { PlantAnswer, TrialPlant } from './run-trials.ts';

/** Bytes of a trial's log that no honest trial needs: 8 s at 10 kHz in long numbers is under 8 MB. */
const MOST_OUTPUT = 32 * 1024 * 1024;

export interface OutsidePlantOptions {
  /** The command and its arguments, as words. */
  readonly words: readonly string[];
  readonly profile: Profile;
  /** s. */
  readonly timeout: number;
  readonly edge: Edge;
  /** Reads the command's standard output as a trial log; throws the log room's errors. */
  readonly readLog: (bytes: Uint8Array, name: string) => Promise<Samples>;
}

/** `holdfast/trial-request@1`; contracts, section 3. */
function trialRequest(proposal: Proposal, trial: number, profile: Profile): Readonly<Record<string, unknown>> {
  return {
    format: 'holdfast/trial-request@1',
    trial,
    stage: proposal.stage,
    gains: proposal.gains,
    controller: profile.controller,
    move: proposal.move,
    duration: proposal.duration,
    outputCap: proposal.outputCap,
  };
}

/** A command that a person vouches for as a simulation: no trial of it moves anything. Contracts, section 3. */
export function simulatedCommand(options: OutsidePlantOptions): TrialPlant {
  return { run: (proposal, trial) => runCommand(proposal, trial, options) };
}

/** A command that moves a machine: each trial needs the permit that the gate gave for this very trial. */
export function poweredCommand(options: OutsidePlantOptions): TrialPlant {
  return {
    run: (proposal, trial, permit) => {
      if (permit?.trial !== trial) throw new Error(`Trial ${trial} has no permit.`);
      return runCommand(proposal, trial, options);
    },
  };
}

/** Starts the command once: one request in, one log out. */
async function runCommand(proposal: Proposal, trial: number, options: OutsidePlantOptions): Promise<PlantAnswer> {
  const request = `${JSON.stringify(trialRequest(proposal, trial, options.profile))}\n`;
  const end = await runProcess(options.words, request, {
    cwd: options.edge.cwd,
    timeout: options.timeout * 1000,
    mostOutput: MOST_OUTPUT,
    interrupted: options.edge.interrupted,
  });
  return answerOf(end, proposal, trial, options);
}

async function answerOf(
  end: ProcessEnd,
  proposal: Proposal,
  trial: number,
  options: OutsidePlantOptions,
): Promise<PlantAnswer> {
  const fail = (what: string, remedy: string, said = ''): PlantAnswer => ({
    kind: 'failed',
    failure: unusable(`Trial ${trial} failed: ${what}${saidText(said)}`, remedy, { file: options.words[0] ?? null }),
  });
  switch (end.kind) {
    case 'interrupted':
      return { kind: 'interrupted' };
    case 'not-started':
      return fail(
        `the command did not start (${end.reason}).`,
        'Check its name and path; it is started without a shell.',
      );
    case 'timed-out':
      return fail(
        `no log within ${options.timeout} s; the command and all that it started were ended.`,
        'Mend the command, or give it longer with --plant-timeout.',
        end.said,
      );
    case 'flooded':
      return fail(
        `it printed more than ${MOST_OUTPUT / 1024 / 1024} MB and was ended.`,
        'A trial log is one header row and one row a tick, and nothing else.',
        end.said,
      );
    case 'killed':
      return fail(`the command was ended by ${end.signal}.`, 'Mend the command.', end.said);
    case 'exited':
      if (end.code !== 0)
        return fail(`the command ended with exit code ${end.code}.`, 'Mend what it reports.', end.said);
      return readAnswer(end.output, end.said, proposal, trial, options);
  }
}

async function readAnswer(
  output: Uint8Array,
  said: string,
  proposal: Proposal,
  trial: number,
  options: OutsidePlantOptions,
): Promise<PlantAnswer> {
  const name = `log of trial ${trial}`;
  try {
    const samples = await options.readLog(output, name);
    checkAnswer(samples, proposal, options.profile);
    return { kind: 'log', samples };
  } catch (error) {
    const failure = explain(error);
    if (failure.exit !== EXIT.unusableInput) throw error;
    const what = `Trial ${trial} failed: the command's log does not read: ${failure.message}${saidText(said)}`;
    return { kind: 'failed', failure: unusable(what, failure.remedy, { file: name, line: failure.where.line }) };
  }
}

/** Is this the trial that was asked for? A log of something else must not teach the model. */
function checkAnswer(samples: Samples, proposal: Proposal, profile: Profile): void {
  const first = samples.time[0] ?? 0;
  const last = samples.time[samples.time.length - 1] ?? 0;
  if (last - first < 0.5 * proposal.duration) {
    throw unusable(
      `It ends ${(last - first).toPrecision(3)} s after its start; ${proposal.duration} s were asked for.`,
      'Print the whole trial.',
    );
  }
  const { from, to } = proposal.move;
  const off = Array.from(samples.setpoint).findIndex(
    (setpoint) => Math.abs(wrapError(setpoint - to, profile.continuous)) > 0.01 * Math.abs(to - from),
  );
  if (off >= 0) {
    throw unusable(
      `Its setpoint is ${samples.setpoint[off]} ${profile.unit} in row ${off + 1}; ${to} ${profile.unit} was asked for.`,
      'Set the setpoint to the move’s `to` from time 0 on, in the profile’s unit.',
    );
  }
}

function saidText(said: string): string {
  const words = lastWords(said);
  return words === '' ? '' : ` It said:\n${words.replaceAll(/^/gm, '  ')}`;
}
