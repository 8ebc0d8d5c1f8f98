import { fullOutput, type Gains } from '../controller/settings.ts';
import { plantWith } from '../mechanism/plant-of.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Samples } from '../record/samples.ts';
import { amount, percent, seconds } from '../report/amounts.ts';
import { type Page, table } from '../report/page.ts';
import { type Figures, figuresOf } from '../trial/figures.ts';
import { readingOf, simulateTrial } from '../trial/simulate.ts';
import { figuresDocument } from './documents.ts';

type FigureName = keyof ReturnType<typeof figuresDocument>;
type Spread = readonly [best: number | null, low: number | null, high: number | null];

/** Figures of a trial that is yet to be run: on the best estimate, and between which they lie nine times in ten. */
export type FigureSpread = Readonly<Record<FigureName, Spread>>;

/** What is tried in rehearsal. */
export interface Rehearsed {
  readonly gains: Gains;
  readonly move: Move;
  readonly duration: number;
  readonly outputCap: number;
}

/** Runs the trial on the best estimate and on every draw, and measures each. */
export function expectedFigures(
  profile: Profile,
  best: ResponseModel,
  draws: readonly ResponseModel[],
  trial: Rehearsed,
  seed: number,
): FigureSpread {
  const measure = (response: ResponseModel) => figuresDocument(figuresOn(profile, response, trial, seed));
  const middle = measure(best);
  const all = draws.map(measure);
  const spread = (name: FigureName): Spread => {
    // A figure that some rehearsals never reach is as late as can be: it stands at the far end.
    const values = all.map((one) => one[name] ?? Number.POSITIVE_INFINITY).sort((a, b) => a - b);
    const at = (share: number) => {
      const value = values[Math.round(share * (values.length - 1))] ?? Number.POSITIVE_INFINITY;
      return Number.isFinite(value) ? value : null;
    };
    return [middle[name], at(0.05), at(0.95)];
  };
  const names = Object.keys(middle) as FigureName[];
  return Object.fromEntries(names.map((name) => [name, spread(name)])) as Record<FigureName, Spread>;
}

/** One simulated trial on a response model, read as the profile's sensor reads. */
export function rehearse(profile: Profile, response: ResponseModel, trial: Rehearsed, seed: number): Samples {
  const { controller, continuous } = profile;
  const mechanism = { plant: plantWith(profile, response), reading: readingOf(profile) };
  return simulateTrial(mechanism, { controller, continuous, shape: null, ...trial }, seed);
}

function figuresOn(profile: Profile, response: ResponseModel, trial: Rehearsed, seed: number): Figures {
  const { controller, continuous, target, sensor } = profile;
  const full = fullOutput(controller);
  return figuresOf(rehearse(profile, response, trial, seed), {
    move: trial.move,
    tolerance: target.tolerance,
    continuous,
    outputLimit: trial.outputCap * full,
    fullOutput: full,
    resolution: sensor?.resolution ?? 0,
  });
}

/** The expected figures against the target, a row each. */
export function expectedLines(figures: FigureSpread, profile: Profile, page: Page): readonly string[] {
  const { target } = profile;
  const length = (value: number) => amount(value, profile);
  const row = (name: string, spread: Spread, show: (value: number) => string, bound = '') => {
    const told = (value: number | null) => (value === null ? 'never' : show(value));
    return [name, told(spread[0]), `${told(spread[1])} to ${told(spread[2])}`, bound];
  };
  const rows = [
    ['', 'best', 'nine times in ten', 'target'],
    row('rise time', figures.riseTime, seconds),
    row('overshoot', figures.overshoot, percent, `at most ${percent(target.overshoot)}`),
    row('settling time', figures.settlingTime, seconds, `at most ${seconds(target.settlingTime)}`),
    row('resting error', figures.restingError, length, `within ${length(target.tolerance)}`),
  ];
  return table(rows, ['left', 'right', 'left', 'left'], page);
}
