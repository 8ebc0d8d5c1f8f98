import { type ControllerSettings, type Gains, NO_GAINS } from '../../src/controller/settings.ts';
import type { PlantModel, ResponseModel } from '../../src/plant/response-model.ts';
import type { Samples } from '../../src/record/samples.ts';
import { simulateTrial } from '../../src/trial/simulate.ts';
import type { Reading, TrialRequest } from '../../src/trial/trial.ts';

export const PERFECT: Reading = { resolution: 0, noise: 0, delay: 0, period: 0, jitter: 0 };

/** A plant of K and τ without friction unless it is given. */
export function plantOf(
  topSpeed: number,
  lag: number,
  response: Partial<ResponseModel> = {},
  rest: Partial<PlantModel> = {},
): PlantModel {
  return {
    quantity: 'position',
    response: {
      topSpeed,
      lag,
      drag: 0,
      dragBack: response.drag ?? 0,
      breakaway: 0,
      breakawayBack: response.breakaway ?? 0,
      hold: 0,
      delay: 0,
      ...response,
    },
    gravity: response.hold === undefined ? { kind: 'none' } : { kind: 'constant' },
    stops: { min: null, max: null },
    sag: 0,
    forceLimit: null,
    coupling: null,
    ...rest,
  };
}

export interface Run {
  readonly plant: PlantModel;
  readonly gains: Partial<Gains>;
  readonly to?: number;
  readonly from?: number;
  readonly duration: number;
  readonly period: number;
  /** Largest output; as good as unlimited when left out. Output is a fraction of 1. */
  readonly most?: number;
  readonly settings?: Partial<ControllerSettings>;
  readonly reading?: Partial<Reading>;
  readonly request?: Partial<TrialRequest>;
  readonly seed?: number;
}

/** One simulated trial; a plant is given per unit of output, so that output and fraction are the same number. */
export function runOf(run: Run): Samples {
  const most = run.most ?? 1e9;
  return simulateTrial(
    { plant: perFull(run.plant, most), reading: { ...PERFECT, ...run.reading } },
    {
      controller: {
        period: run.period,
        output: { unit: 'fraction', min: -most, max: most },
        timeBase: 'seconds',
        form: 'parallel',
        derivativeOn: 'error',
        derivativeFilter: 0,
        outsideZone: 'hold',
        sumLimit: null,
        slew: null,
        ...run.settings,
      },
      gains: { ...NO_GAINS, ...run.gains },
      move: { from: run.from ?? 0, to: run.to ?? 1 },
      duration: run.duration,
      outputCap: 1,
      continuous: null,
      shape: null,
      ...run.request,
    },
    run.seed ?? 1,
  );
}

/** The same plant told in fractions of a full output of `most`. */
function perFull(plant: PlantModel, most: number): PlantModel {
  const { response } = plant;
  return {
    ...plant,
    response: {
      ...response,
      topSpeed: response.topSpeed * most,
      drag: response.drag / most,
      dragBack: response.dragBack / most,
      breakaway: response.breakaway / most,
      breakawayBack: response.breakawayBack / most,
      hold: response.hold / most,
    },
  };
}

/** Largest reading over the target, % of the move. */
export function overshootOf(samples: Samples, from = 0, to = 1): number {
  const share = (y: number) => (y - from) / (to - from);
  return 100 * Math.max(0, Math.max(...Array.from(samples.measured, share)) - 1);
}
