import { describe, expect, test } from 'vitest';
import { nextStep } from '../../src/coach/next-step.ts';
import type { CoachStep, RunHistory, TrialRecord } from '../../src/coach/step.ts';
import { plantWith, responseOf } from '../../src/mechanism/plant-of.ts';
import type { Profile } from '../../src/mechanism/profile.ts';
import type { ResponseModel } from '../../src/plant/response-model.ts';
import type { Samples } from '../../src/record/samples.ts';
import { readingOf, simulateTrial } from '../../src/trial/simulate.ts';
import { starter } from '../fixtures/starters.ts';

type Stop = Extract<CoachStep, { kind: 'stop' }>;

/** A whole run of a profile on a mechanism that really answers as `truth`. */
function run(
  profile: Profile,
  truth: ResponseModel,
  options: {
    readonly spoil?: (samples: Samples) => Samples;
    readonly maxTrials?: number;
    readonly minutesLeft?: number | null;
  } = {},
): { readonly end: Stop; readonly trials: readonly TrialRecord[]; readonly steps: readonly CoachStep[] } {
  let history: RunHistory = {
    profile,
    trials: [],
    maxTrials: options.maxTrials ?? 12,
    minutesLeft: options.minutesLeft ?? null,
    seed: 1,
  };
  const steps: CoachStep[] = [];
  for (;;) {
    const step = nextStep(history);
    steps.push(step);
    if (step.kind === 'stop') return { end: step, trials: history.trials, steps };
    const { stage, gains, move, outputCap, duration, band } = step.proposal;
    const plain = simulateTrial(
      { plant: { ...plantWith(profile, truth), coupling: null }, reading: readingOf(profile) },
      { controller: profile.controller, gains, move, duration, outputCap, continuous: profile.continuous, shape: null },
      50 + history.trials.length,
    );
    const samples = options.spoil ? options.spoil(plain) : plain;
    history = {
      ...history,
      trials: [...history.trials, { trial: history.trials.length + 1, stage, gains, move, outputCap, samples, band }],
    };
  }
}

const truthOf = (profile: Profile, change: Partial<ResponseModel> = {}): ResponseModel => {
  const nameplate = responseOf(profile);
  if (!nameplate) throw new Error('this starter is known');
  return { ...nameplate, ...change };
};

const proposals = (steps: readonly CoachStep[]) =>
  steps.flatMap((step) => (step.kind === 'trial' ? [step.proposal] : []));

describe('a run', () => {
  test.each(['lift', 'drivetrain', 'turret', 'roller'])(
    'on the simulated %s meets its target in trials, on every move',
    (name) => {
      const profile = starter(name);
      const { end, trials } = run(profile, truthOf(profile));
      expect(end.outcome.met).toBe(true);
      expect(trials.length).toBeLessThanOrEqual(8);
      // Met by trials, not by the model: every move was run with the gains that are handed over, at the full cap, and settled.
      for (const [from, to] of profile.target.moves) {
        const proof = trials.findIndex(
          (trial) =>
            trial.move.from === from &&
            trial.move.to === to &&
            trial.gains.kp === end.outcome.gains.kp &&
            trial.outputCap === profile.limits.outputCap &&
            end.reading.trials[trial.trial - 1]?.meets === true,
        );
        expect(proof).toBeGreaterThanOrEqual(0);
      }
    },
  );

  test('learns a machine that its sheet misjudges: a quarter slower, twice the drag', () => {
    const profile = starter('turret');
    const sheet = truthOf(profile);
    const truth = {
      ...sheet,
      topSpeed: 0.75 * sheet.topSpeed,
      lag: 1.2 * sheet.lag,
      drag: 0.1,
      dragBack: 0.1,
      breakaway: 0.13,
      breakawayBack: 0.13,
    };
    const { end } = run(profile, truth);
    expect(end.outcome.met).toBe(true);
    const { response } = end.reading.learnt ?? { response: sheet };
    expect(response.topSpeed / truth.topSpeed).toBeCloseTo(1, 1);
  });

  test('needs no nameplate: everything is learnt from logs', () => {
    const profile = starter('slide');
    const truth: ResponseModel = {
      topSpeed: 1100,
      lag: 0.12,
      drag: 0.06,
      dragBack: 0.06,
      breakaway: 0.08,
      breakawayBack: 0.08,
      hold: 0,
      delay: 0.01,
    };
    expect(run(profile, truth).end.outcome.met).toBe(true);
  });

  test('goes P first, then what is needed, then proof; and says why at each step', () => {
    const profile = starter('turret');
    const { steps } = run(profile, truthOf(profile));
    const stages = proposals(steps).map((proposal) => proposal.stage);
    expect(stages[0]).toBe('ready');
    expect(stages[1]).toBe('proportional');
    expect(proposals(steps)[1]?.gains.kd).toBe(0);
    expect(stages.at(-1)).toBe('proof');
    for (const proposal of proposals(steps)) {
      expect(proposal.why.length).toBeGreaterThan(40);
      expect(proposal.expect).not.toBe('');
      expect(proposal.unless).not.toBe('');
      expect(proposal.why).not.toMatch(/NaN|undefined|Infinity/);
    }
  });

  test('first asks for little: a short move, at most 40 % of output or the weight and a quarter', () => {
    for (const name of ['lift', 'drivetrain', 'turret', 'arm', 'slide']) {
      const profile = starter(name);
      const step = nextStep({ profile, trials: [], maxTrials: 12, minutesLeft: null, seed: 1 });
      if (step.kind !== 'trial') throw new Error('a run begins with a trial');
      const hold = responseOf(profile)?.hold ?? 0;
      expect(step.proposal.outputCap).toBeLessThanOrEqual(Math.max(0.4, hold + 0.25));
      const shortest = Math.min(...profile.target.moves.map(([from, to]) => Math.abs(to - from)));
      expect(Math.abs(step.proposal.move.to - step.proposal.move.from)).toBeLessThanOrEqual(shortest * 1.000001);
    }
  });

  test('keeps 99 of 100 rehearsals inside the travel limits: with the end stop close, it creeps up on it', () => {
    const lift = starter('lift');
    const tight = { ...lift, limits: { ...lift.limits, max: 1.03 } };
    const { trials, end } = run(tight, truthOf(tight));
    for (const trial of trials) for (const at of trial.samples.measured) expect(at).toBeLessThan(1.03);
    expect(
      end.reading.trials.every((reading) => !reading.verdicts.some((verdict) => verdict.is === 'hit-a-stop')),
    ).toBe(true);
  });

  test('gives the same answer for the same history', () => {
    const profile = starter('turret');
    const { trials } = run(profile, truthOf(profile), { maxTrials: 2 });
    const history: RunHistory = { profile, trials, maxTrials: 12, minutesLeft: null, seed: 1 };
    expect(nextStep(history)).toEqual(nextStep(history));
  });
});

describe('when tuning is pointless it stops and says so', () => {
  const profile = starter('turret');
  const truth = truthOf(profile);
  const stop = (spoil: (samples: Samples) => Samples) => run(profile, truth, { spoil }).end.outcome;

  test('a reversed sensor', () => {
    const outcome = stop((samples) => ({ ...samples, measured: samples.measured.map((value) => -value) }));
    expect(outcome).toMatchObject({ met: false, stopped: 'reversed' });
    expect(outcome.why).toMatch(/swap the sign/i);
  });

  test('a sensor that never moves, after more output has been tried', () => {
    const { end, trials } = run(profile, truth, {
      spoil: (samples) => ({ ...samples, measured: samples.measured.map(() => 0) }),
    });
    expect(end.outcome).toMatchObject({ met: false, stopped: 'deaf' });
    expect(trials.length).toBeLessThanOrEqual(5);
  });

  test.each([
    ['degrees read as turns', 1 / 360],
    ['millimetres for inches', 25.4],
  ])('a wrong scale: %s', (_, factor) => {
    const outcome = stop((samples) => ({ ...samples, measured: samples.measured.map((value) => value * factor) }));
    expect(outcome.met).toBe(false);
  });

  test('a target beyond the motor', () => {
    const hopeless = { ...profile, target: { ...profile.target, settlingTime: 0.15 } };
    const { end } = run(hopeless, truth);
    expect(end.outcome).toMatchObject({ met: false, stopped: 'out-of-reach' });
    expect(end.outcome.why).toMatch(/full output all the way/);
  });

  test('a resolution coarser than the tolerance, before anything is powered', () => {
    const coarse = { ...profile, sensor: { resolution: 3, noise: 0, delay: 0 } };
    const { end, trials } = run(coarse, truth);
    expect(trials).toHaveLength(0);
    expect(end.outcome.stopped).toMatch(/resolution/);
  });

  test('trials used up: the best proven gains are held, and what stands in the way is named', () => {
    const { end } = run(profile, truth, { maxTrials: 2 });
    expect(end.outcome.met).toBe(false);
    expect(end.outcome.stopped).toBe('trials used up');
    expect(end.outcome.why).toMatch(/Last trial/);
  });

  test('no minutes left for one more trial: it says to hold what is proven', () => {
    expect(run(profile, truth, { minutesLeft: 1 }).end.outcome.stopped).toBe('minutes used up');
  });
});
