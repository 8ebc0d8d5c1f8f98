import type { Proposal, TrialReading, TrialRecord } from '../../src/coach/step.ts';
import { type Gains, NO_GAINS } from '../../src/controller/settings.ts';
import type { LearntModel } from '../../src/learn/learnt.ts';
import type { Profile } from '../../src/mechanism/profile.ts';
import type { Figures } from '../../src/trial/figures.ts';
import type { Verdict, VerdictName } from '../../src/trial/verdict.ts';
import { madeTrial } from '../chart/made.ts';
import { load, made, response } from '../safety/made.ts';

export const UNICODE = { width: 80, style: { colour: false, unicode: true } } as const;
export const ASCII = { width: 80, style: { colour: false, unicode: false } } as const;
export const NARROW = { width: 40, style: { colour: false, unicode: true } } as const;

/** A made-up lift that reads to 0.2 mm and takes its output in percent. */
export const lift: Profile = made({
  kind: 'lift',
  name: 'lift',
  title: 'Two-stage lift',
  load: { ...load, mass: 9.5 },
  limits: { min: 0, max: 1.4, outputCap: 1 },
  hazards: ['falls', 'pinch'],
  sensor: { resolution: 0.0002, noise: 0, delay: 0 },
  controller: { ...made().controller, output: { unit: 'percent', min: -100, max: 100 } },
  target: { tolerance: 0.005, overshoot: 5, settlingTime: 1, moves: [[0.2, 1]] },
});

export const gains: Gains = { ...NO_GAINS, kp: 610, ki: 200, kd: 31, zone: 0.05, hold: 11.4 };

export const figures: Figures = {
  riseTime: 0.412,
  overshoot: 7.31,
  peakTime: 0.6,
  settlingTime: null,
  restingError: 0.0042,
  swingRatio: 0.31,
  swingPeriod: 0.44,
  saturated: 0.36,
  chatter: 3.2,
  iae: 0.2,
  itae: 0.1,
  effort: 0.3,
};

export function verdict(is: VerdictName, because: string): Verdict {
  return { is, because, rule: 'made up', numbers: {}, samples: null };
}

export const reading: TrialReading = {
  trial: 3,
  figures,
  verdicts: [
    verdict(
      'stuck-short',
      'It rests 4.2 mm short: 3.1 % output at rest is under the 4.5 % that this lift needs to start moving.',
    ),
    verdict('overshoots', 'It went 58 mm past, 7.3 % of the move where 5 % is allowed.'),
  ],
  inBand: false,
  meets: false,
};

export const record: TrialRecord = {
  trial: 3,
  stage: 'integral',
  gains,
  move: { from: 0.2, to: 1 },
  outputCap: 1,
  samples: madeTrial().samples,
  band: madeTrial().band,
};

export const proposal: Proposal = {
  stage: 'derivative',
  gains,
  move: { from: 0.2, to: 1 },
  duration: 2.5,
  outputCap: 0.8,
  why: 'It overshot by 7.3 % with the sum at 6 % of output: 31 % per m/s brakes it over the last 0.2 s.',
  expect: 'It settles in 0.72 s (0.61 s to 0.88 s), past the target by 2 %.',
  unless: 'If it rests more than 5 mm away, something rubs.',
  boundedBy: 'trust: at most 2 times the last Kp',
  band: null,
  expected: null,
  margins: null,
};

export const learnt: LearntModel = {
  response: response({ topSpeed: 1.9, lag: 0.084, drag: 0.031, breakaway: 0.045, hold: 0.114, delay: 0.018 }),
  intervals: {
    topSpeed: { best: 1.9, low: 1.84, high: 1.97 },
    lag: { best: 0.084, low: 0.071, high: 0.097 },
    drag: { best: 0.031, low: 0.024, high: 0.039 },
    breakaway: { best: 0.045, low: 0.01, high: 0.2 },
    hold: { best: 0.114, low: 0.109, high: 0.118 },
    delay: { best: 0.018, low: 0.012, high: 0.024 },
  },
  draws: [],
  fit: 98.66,
  residual: 0.002,
  rowShift: 1,
  outputRebuilt: false,
  unlearnt: ['breakaway'],
  usable: true,
  warnings: [],
};
