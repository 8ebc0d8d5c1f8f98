// A 500-sample, six-parameter fit, and what the same least-squares problem costs a general library.
import { levenbergMarquardt } from 'ml-levenberg-marquardt';
import { driveOf } from '../../src/learn/evidence.ts';
import { fitModel } from '../../src/learn/fit.ts';
import { learn } from '../../src/learn/learn.ts';
import { fitPercent } from '../../src/learn/output-error.ts';
import { coordinatesOf } from '../../src/learn/parameters.ts';
import { priorOf } from '../../src/learn/prior.ts';
import { plantWith, responseOf } from '../../src/mechanism/plant-of.ts';
import { respond } from '../../src/plant/respond.ts';
import { simulatedMechanismOf, simulateTrial } from '../../src/trial/simulate.ts';
import { starter } from '../fixtures/starters.ts';

const profile = starter('lift');
const mechanism = simulatedMechanismOf(profile);
const truth = responseOf(profile);
if (!mechanism || !truth) throw new Error('the lift is known');
const gains = { kp: 8, ki: 0, kd: 0, zone: null, hold: truth.hold, pace: 0 };
const move = { from: 0.2, to: 1 };
const samples = simulateTrial(
  mechanism,
  { controller: profile.controller, gains, move, duration: 9.98, outputCap: 1, continuous: null, shape: null },
  1,
);
const drive = driveOf({ samples, gains, outputCap: 1, move }, profile);
if (typeof drive === 'string') throw new Error(drive);
const coordinates = coordinatesOf(priorOf(profile));
const fitted = () => fitModel({ drives: [drive], profile, coordinates, rowShift: 0, starts: [] });
const request = { profile, trials: [{ samples, gains, outputCap: 1, move }], draws: 64, seed: 1 };
const learnt = learn(request);

const median = (values: readonly number[]) => [...values].sort((a, b) => a - b)[values.length >> 1] ?? 0;
const timed = (run: () => void) => {
  const start = performance.now();
  run();
  return performance.now() - start;
};

const plant = plantWith(profile, truth);
const model = ([topSpeed = 1, lag = 1, drag = 0.1, excess = 0.1, hold = 0, delay = 0]: number[]) => {
  const response = {
    topSpeed,
    lag,
    drag,
    dragBack: drag,
    breakaway: drag * (1 + excess),
    breakawayBack: drag * (1 + excess),
    hold,
    delay: Math.max(0, delay),
  };
  const answer = respond({ ...plant, response }, drive.start, drive.time, drive.output);
  return (row: number) => answer[row] ?? 0;
};
const library = () =>
  levenbergMarquardt({ x: [...drive.time.keys()], y: [...drive.measured] }, model, {
    initialValues: [truth.topSpeed * 1.2, truth.lag * 1.2, 0.08, 0.4, 0.03, 0.024],
    gradientDifference: [1e-3, 1e-5, 1e-4, 1e-2, 1e-4, 1e-4],
    centralDifference: true,
    damping: 1e-2,
    maxIterations: 40,
    errorTolerance: 1e-9,
  });

const WORK = {
  fit: fitted,
  'whole answer with intervals and 64 draws': () => learn(request),
  'the same, started from what was learnt before': () => learn({ ...request, from: learnt }),
  'ml-levenberg-marquardt, 40 iterations on the same simulation': library,
};
const taken = new Map<string, number[]>(Object.keys(WORK).map((name) => [name, []]));
for (let round = 0; round < 15; round++) {
  for (const [name, run] of Object.entries(WORK)) {
    const time = timed(run);
    // The first rounds are the compiler's.
    if (round > 3) taken.get(name)?.push(time);
  }
}
const found = fitted();
const percent = fitPercent([drive], found.problem.answers.of(found.response));
console.log(
  `${drive.time.length} samples, ${found.problem.free.length} parameters, fit ${percent.toFixed(2)} %; medians of 11:`,
);
const reference = median(taken.get('ml-levenberg-marquardt, 40 iterations on the same simulation') ?? []);
for (const [name, times] of taken) {
  const middle = median(times);
  console.log(
    `  ${name.padEnd(62)} ${middle.toFixed(1).padStart(6)} ms   ${(middle / reference).toFixed(2)} of the library's`,
  );
}
