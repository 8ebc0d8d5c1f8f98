import type { Profile } from '../mechanism/profile.ts';
import { MODEL_PARAMETERS, type ModelParameter } from '../plant/response-model.ts';
import { alignedFit } from './alignment.ts';
import { deadTimeOf } from './dead-time.ts';
import { type Drive, driveOf, type Unusable } from './evidence.ts';
import { intervalsOf } from './intervals.ts';
import type { LearnRequest, LearntModel, Prior, TrialEvidence } from './learnt.ts';
import { fitPercent } from './output-error.ts';
import { coordinatesOf, type FitParameter, placeOf } from './parameters.ts';
import { drawsFrom, type Posterior, posteriorOf } from './posterior.ts';
import { drawPrior, priorOf } from './prior.ts';

/** Draws of a prior that its intervals are read from. */
const PRIOR_DRAWS = 400;

/** A fit under this explains the logs too badly to be searched on, %; unless all that is left is the sensor's own. */
const LEAST_FIT = 70;
const SENSOR_ALONE = 2;

/** A prior wider than this, σ in ln, is no more than a guess. */
const GUESSWORK = 0.8;

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
    if (typeof drive !== 'string') drives.push(drive);
    else warnings.push(`Trial ${index + 1} teaches nothing: ${REASONS[drive]}.${answersAfter(trial, drive, profile)}`);
  });
  if (drives.length === 0) return unlearntModel(request, prior, warnings);
  const { fitted: first, rowShift } = alignedFit({
    drives,
    profile,
    coordinates: coordinatesOf(prior),
    from: request.from ?? null,
  });
  const posterior = posteriorOf(first, request.seed);
  const { fitted } = posterior;
  const fit = fitPercent(drives, fitted.problem.answers.of(fitted.response));
  if (rowShift > 0) {
    warnings.push(
      `The output in a row acted on the interval that ends there: it was moved one row to line up with the motion.`,
    );
  }
  const missing = drives.reduce((sum, drive) => sum + drive.missing, 0);
  if (missing > 0)
    warnings.push(`${missing} ${missing === 1 ? 'row holds' : 'rows hold'} no number and did not count.`);
  const outputRebuilt = drives.some((drive) => drive.rebuilt);
  if (outputRebuilt) warnings.push('The log has no output; it was rebuilt from the gains.');
  const residual = fitted.weighing.sigma[0] ?? 0;
  const unlearnt = unlearntOf(posterior);
  const explains = fit >= LEAST_FIT || residual <= SENSOR_ALONE * (drives[0]?.floor ?? 0);
  if (!explains) warnings.push(`The model explains only ${fit.toFixed(0)} % of the motion: it is not relied on.`);
  // With a nameplate, what the trials do not tell is roughly known all the same.
  const isBlind = prior.sigma.topSpeed > GUESSWORK && unlearnt.includes('topSpeed') && unlearnt.includes('lag');
  if (isBlind)
    warnings.push('The trials tell neither top speed nor lag, and no nameplate does: move it farther or faster.');
  return {
    response: fitted.response,
    intervals: intervalsOf(fitted.response, posterior.models, posterior.shares),
    draws: drawsFrom(posterior, request.draws),
    fit,
    residual,
    rowShift,
    outputRebuilt,
    unlearnt,
    usable: explains && !isBlind,
    warnings,
  };
}

/** What a log without output and gains still tells: how long its reading takes to answer. */
function answersAfter({ samples }: TrialEvidence, why: Unusable, profile: Profile): string {
  if (why !== 'no output and no gains') return '';
  const { resolution, noise } = profile.sensor ?? { resolution: 0, noise: 0 };
  const dead = deadTimeOf(samples, Math.max(1.5 * resolution, 4 * noise));
  if (dead === null) return '';
  const [low, best, high] = [dead.low, dead.best, dead.high].map((time) => time.toFixed(3));
  return ` Its reading answers the setpoint after ${best} s (${low} to ${high} s).`;
}

const REASONS: Readonly<Record<Unusable, string>> = {
  'too short': 'it has fewer than 8 samples',
  'time goes back': 'its time goes back',
  'no output and no gains': 'it has no output, and the gains to rebuild it are not known',
  'not finite': 'too many of its values are not numbers',
  'never driven': 'its output is zero throughout',
  'never moved': 'its reading never changes',
};

/** What the trials left about as wide as the prior had it. */
function unlearntOf({ fitted, places, shares }: Posterior): readonly ModelParameter[] {
  const { free, coordinates } = fitted.problem;
  const isWide = (name: FitParameter): boolean => {
    const j = placeOf(name);
    if (!free.includes(j)) return false;
    let mean = 0;
    places.forEach((place, at) => {
      mean += (shares[at] ?? 0) * (place[j] ?? 0);
    });
    let variance = 0;
    places.forEach((place, at) => {
      variance += (shares[at] ?? 0) * ((place[j] ?? 0) - mean) ** 2;
    });
    return Math.sqrt(variance) > UNLEARNT * (coordinates.deviations[j] ?? 1);
  };
  return MODEL_PARAMETERS.filter((name) => isWide(name === 'breakaway' ? 'excess' : name));
}

function unlearntModel(request: LearnRequest, prior: Prior, warnings: readonly string[]): LearntModel {
  const draws = drawPrior(prior, Math.max(PRIOR_DRAWS, request.draws), request.seed);
  return {
    response: prior.response,
    intervals: intervalsOf(prior.response, draws, new Float64Array(draws.length).fill(1 / draws.length)),
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
