// From a log to the next gains: learning, search, safety and promise, over whole runs of the starters.
import { nextStep } from '../../src/coach/next-step.ts';
import type { RunHistory } from '../../src/coach/step.ts';
import { simulatedMechanismOf, simulateTrial } from '../../src/trial/simulate.ts';
import { starter } from '../fixtures/starters.ts';

const times: number[] = [];
for (let round = 0; round < 3; round++) {
  for (const name of ['lift', 'drivetrain', 'turret', 'arm', 'wrist', 'roller']) {
    const profile = starter(name);
    const mechanism = simulatedMechanismOf(profile);
    if (!mechanism) throw new Error(`${name} is known`);
    let history: RunHistory = { profile, trials: [], maxTrials: 12, minutesLeft: null, seed: 1 };
    const own: number[] = [];
    for (;;) {
      const start = performance.now();
      const step = nextStep(history);
      own.push(performance.now() - start);
      if (step.kind === 'stop') break;
      const { stage, gains, move, outputCap, duration, band } = step.proposal;
      const trial = history.trials.length + 1;
      const request = {
        controller: profile.controller,
        gains,
        move,
        duration,
        outputCap,
        continuous: profile.continuous,
        shape: null,
      };
      const samples = simulateTrial(mechanism, request, 100 + trial);
      history = { ...history, trials: [...history.trials, { trial, stage, gains, move, outputCap, samples, band }] };
    }
    if (round > 0) times.push(...own.slice(1));
    if (round === 2) console.log(`${name.padEnd(11)} ${own.map((time) => time.toFixed(0).padStart(5)).join(' ')} ms`);
  }
}
times.sort((a, b) => a - b);
console.log(
  `next gains after a log: median ${(times[times.length >> 1] ?? 0).toFixed(0)} ms, 90th percentile ${(times[Math.floor(0.9 * times.length)] ?? 0).toFixed(0)} ms over ${times.length} answers`,
);
