import type { ModelParameter, ResponseModel } from '../plant/response-model.ts';
import type { Interval } from '../record/band.ts';

/** 95 % intervals of the parameters about a best estimate, from models with their shares of the belief. */
export function intervalsOf(
  best: ResponseModel,
  models: readonly ResponseModel[],
  shares: Float64Array,
): Record<ModelParameter, Interval> {
  const interval = (name: ModelParameter): Interval => {
    const low = quantileOf(models, shares, name, 0.025);
    const high = quantileOf(models, shares, name, 0.975);
    return { best: best[name], low: Math.min(best[name], low), high: Math.max(best[name], high) };
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

/** The value below which `share` of the belief lies, by linear interpolation between the models' middles. */
function quantileOf(
  models: readonly ResponseModel[],
  shares: Float64Array,
  name: ModelParameter,
  share: number,
): number {
  const order = Array.from(models.keys()).sort((a, b) => (models[a]?.[name] ?? 0) - (models[b]?.[name] ?? 0));
  let below = 0;
  let valueBefore = models[order[0] ?? 0]?.[name] ?? 0;
  let middleBefore = 0;
  for (const at of order) {
    const own = shares[at] ?? 0;
    const value = models[at]?.[name] ?? 0;
    const middle = below + 0.5 * own;
    if (middle >= share) {
      const part = middle > middleBefore ? (share - middleBefore) / (middle - middleBefore) : 1;
      return valueBefore + part * (value - valueBefore);
    }
    below += own;
    valueBefore = value;
    middleBefore = middle;
  }
  return valueBefore;
}
