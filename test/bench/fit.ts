// A 500-sample, six-parameter fit, and what the same least-squares problem costs a general library.
import { levenbergMarquardt } from 'ml-levenberg-marquardt';
import { driveOf } from '../../src/learn/evidence.ts';
import { fitModel } from '../../src/learn/fit.ts';
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
const prior = priorOf(profile);

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

const own: number[] = [];
const other: number[] = [];
for (let round = 0; round < 11; round++) {
  own.push(timed(() => fitModel([drive], profile, prior, 0)));
  other.push(timed(library));
}
const found = fitModel([drive], profile, prior, 0);
console.log(
  `fit of ${drive.time.length} samples, ${found.free.length} parameters: median ${median(own.slice(1)).toFixed(1)} ms, fit ${found.fit.toFixed(2)} %`,
);
console.log(
  `ml-levenberg-marquardt, 40 iterations on the same simulation: median ${median(other.slice(1)).toFixed(1)} ms; ours takes ${(median(own.slice(1)) / median(other.slice(1))).toFixed(2)} of it`,
);
