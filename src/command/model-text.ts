import type { LearntModel } from '../learn/learnt.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import { MODEL_PARAMETERS, type ModelParameter } from '../plant/response-model.ts';
import { columned } from './page.ts';

/** How each quantity of the response model is called and shown for one profile. */
export function modelWords(
  profile: Profile,
): Readonly<Record<ModelParameter, readonly [name: string, show: (value: number) => string]>> {
  const perSecond = profile.quantity === 'speed' ? '' : '/s';
  const percent = (value: number) => `${formatNumber(100 * value, 3)} %`;
  const ms = (value: number) => `${formatNumber(1000 * value, 3)} ms`;
  return {
    topSpeed: ['top speed', (value) => `${formatQuantity(value, profile.unit)}${perSecond}`],
    lag: ['lag', ms],
    drag: ['drag', percent],
    breakaway: ['breakaway', percent],
    hold: ['hold', percent],
    delay: ['delay', ms],
  };
}

/** The quantities that mean something for this mechanism: nothing holds itself up but a lift or an arm. */
export function modelParametersOf(profile: Profile): readonly ModelParameter[] {
  const carries = profile.kind === 'lift' || profile.kind === 'arm';
  return MODEL_PARAMETERS.filter((name) => name !== 'hold' || carries);
}

/** What logs taught of the mechanism, with 95 % intervals; drag, breakaway and hold in % of full output. */
export function learntLines(learnt: LearntModel, profile: Profile): readonly string[] {
  const words = modelWords(profile);
  const rows = modelParametersOf(profile).map((name) => {
    const { best, low, high } = learnt.intervals[name];
    const [label, show] = words[name];
    return [label, show(best), `${show(low)} to ${show(high)}`, learnt.unlearnt.includes(name) ? 'not learnt' : ''];
  });
  return columned(rows, ['left', 'right', 'left', 'left']);
}
