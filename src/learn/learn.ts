import { CholeskyDecomposition, Matrix } from 'ml-matrix';
import { MODEL_PARAMETERS, type ModelParameter, type ResponseModel } from '../plant/response-model.ts';
import type { Interval } from '../record/band.ts';
import { normalNumbers } from '../trial/chance.ts';
import { type Drive, driveOf, type Unusable } from './evidence.ts';
import { type Fitted, fitModel } from './fit.ts';
import type { LearnRequest, LearntModel, Prior } from './learnt.ts';
import { decode, PARAMETERS } from './parameters.ts';
import { drawPrior, priorOf } from './prior.ts';

/** Draws from which the 95 % intervals are read; more than are handed out. */
const INTERVAL_DRAWS = 400;

/** A fit under this explains the logs too badly to be searched on, %. */
const LEAST_FIT = 70;

/** An interval wider than this share of its prior's has learnt nothing. */
const UNLEARNT = 0.85;

/**
 * The response model that the trials support, with 95 % intervals and posterior draws; design's model, section 5. Trials that can
 * teach nothing are left out and named in the warnings; without any, the prior is handed back as not usable.
 */
export function learn(request: LearnRequest): LearntModel {
  const { profile } = request;
  const prior = request.prior ?? priorOf(profile);
  const warnings: string[] = [];
  const drives: Drive[] = [];
  request.trials.forEach((trial, index) => {
    const drive = driveOf(trial, profile);
    if (typeof drive === 'string') warnings.push(`Trial ${index + 1} teaches nothing: ${REASONS[drive]}.`);
    else drives.push(drive);
  });
  if (drives.length === 0) return unlearntModel(request, prior, warnings);
  const { fitted, rowShift } = fitWithRows(drives, request, prior);
  if (rowShift > 0) {
    warnings.push(
      `The output in a row acted on the interval that ends there: it was moved one row to line up with the motion.`,
    );
  }
  if (drives.some((drive) => drive.rebuilt)) warnings.push('The log has no output; it was rebuilt from the gains.');
  const draws = posteriorDraws(fitted, INTERVAL_DRAWS, request.seed);
  const usable = fitted.fit >= LEAST_FIT;
  if (!usable) warnings.push(`The model explains only ${fitted.fit.toFixed(0)} % of the motion: it is not relied on.`);
  return {
    response: fitted.response,
    intervals: intervalsOf(fitted.response, draws),
    draws: draws.slice(0, request.draws),
    fit: fitted.fit,
    residual: fitted.residual,
    rowShift,
    outputRebuilt: drives.some((drive) => drive.rebuilt),
    unlearnt: unlearntOf(fitted),
    usable,
    warnings,
  };
}

const REASONS: Readonly<Record<Unusable, string>> = {
  'too short': 'it has fewer than 8 samples',
  'no output and no gains': 'it has no output, and the gains to rebuild it are not known',
  'not finite': 'it holds values that are not numbers',
  'never driven': 'its output is zero throughout',
  'never moved': 'its reading never changes',
};

/** How much better the shifted rows must explain the motion before they are believed. */
const SHIFT_GAIN = 0.6;

function fitWithRows(
  drives: readonly Drive[],
  request: LearnRequest,
  prior: Prior,
): { fitted: Fitted; rowShift: number } {
  const { profile } = request;
  const plain = fitModel(drives, profile, prior, 0);
  // Only a dead time pressed against zero can hide a row that acted earlier, and only a fit that leaves more than the sensor's
  // own steps has anything to gain; a rebuilt output has no row to be wrong.
  const pressed = plain.response.delay < 0.3 * profile.controller.period && drives.every((drive) => !drive.rebuilt);
  if (!pressed || plain.residual < 2 * plain.floor) return { fitted: plain, rowShift: 0 };
  const moved = fitModel(drives, profile, prior, 1);
  return moved.misfit < SHIFT_GAIN * plain.misfit ? { fitted: moved, rowShift: 1 } : { fitted: plain, rowShift: 0 };
}

function posteriorDraws(fitted: Fitted, count: number, seed: number): readonly ResponseModel[] {
  const { free, covariance } = fitted;
  const jitter = Matrix.eye(free.length).mul(1e-12);
  const lower = new CholeskyDecomposition(covariance.clone().add(jitter)).lowerTriangularMatrix;
  const chance = normalNumbers(seed, count * free.length);
  return Array.from({ length: count }, (_, draw) => {
    const at = fitted.at.slice();
    free.forEach((j, row) => {
      let sum = 0;
      for (let k = 0; k <= row; k++) sum += lower.get(row, k) * (chance[draw * free.length + k] ?? 0);
      at[j] = (at[j] ?? 0) + sum;
    });
    return decode(at, fitted.delayScale);
  });
}

function intervalsOf(response: ResponseModel, draws: readonly ResponseModel[]): Record<ModelParameter, Interval> {
  const interval = (name: ModelParameter): Interval => {
    const values = draws.map((draw) => draw[name]).sort((a, b) => a - b);
    const at = (share: number) =>
      values[Math.min(values.length - 1, Math.max(0, Math.round(share * (values.length - 1))))] ?? response[name];
    const best = response[name];
    return { best, low: Math.min(best, at(0.025)), high: Math.max(best, at(0.975)) };
  };
  return {
    topSpeed: interval('topSpeed'),
    lag: interval('lag'),
    drag: interval('drag'),
    breakaway: interval('breakaway'),
    hold: interval('hold'),
    delay: interval('delay'),
  };
}

function unlearntOf(fitted: Fitted): readonly ModelParameter[] {
  const { free, covariance, deviations } = fitted;
  const wide = (name: (typeof PARAMETERS)[number]): boolean => {
    const j = PARAMETERS.indexOf(name);
    const k = free.indexOf(j);
    return k >= 0 && Math.sqrt(covariance.get(k, k)) > UNLEARNT * (deviations[j] ?? 1);
  };
  return MODEL_PARAMETERS.filter((name) => wide(name === 'breakaway' ? 'excess' : name));
}

function unlearntModel(request: LearnRequest, prior: Prior, warnings: readonly string[]): LearntModel {
  const draws = drawPrior(prior, INTERVAL_DRAWS, request.seed);
  return {
    response: prior.response,
    intervals: intervalsOf(prior.response, draws),
    draws: draws.slice(0, request.draws),
    fit: null,
    residual: 0,
    rowShift: 0,
    outputRebuilt: false,
    unlearnt: MODEL_PARAMETERS,
    usable: false,
    warnings: [...warnings, 'No trial could be learnt from.'],
  };
}
