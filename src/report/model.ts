import type { LearntModel } from '../learn/learnt.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { MODEL_PARAMETERS, type ModelParameter } from '../plant/response-model.ts';
import { milliseconds, speedText } from './amounts.ts';
import { hanging, type Page, set, table } from './page.ts';

/** What each quantity means to the person who reads it. */
const MEANINGS: Readonly<Record<ModelParameter, string>> = {
  topSpeed: 'at full output',
  lag: 'to gather speed',
  drag: 'of full output keeps it moving',
  breakaway: 'of full output starts it from rest',
  hold: 'of full output carries its weight',
  delay: 'from output to reading',
};

/** What would teach a quantity that no log has taught yet. */
const TEACHES: Readonly<Record<ModelParameter, string>> = {
  topSpeed: 'a move long enough to get up to speed',
  lag: 'a step of the output',
  drag: 'a move that runs at an even speed, or coasts',
  breakaway: 'a slow start from rest, or coming to rest short',
  hold: 'standing still at two heights',
  delay: 'a sharp step, logged as fast as the loop runs',
};

const NAMES: Readonly<Record<ModelParameter, string>> = {
  topSpeed: 'top speed',
  lag: 'lag',
  drag: 'drag',
  breakaway: 'breakaway',
  hold: 'hold',
  delay: 'delay',
};

function shown(name: ModelParameter, value: number, profile: Profile): string {
  if (name === 'topSpeed') return speedText(value, profile);
  if (name === 'lag' || name === 'delay') return milliseconds(value);
  return `${formatNumber(100 * value, 3)} %`;
}

/** What logs have taught of a mechanism, a row a quantity with its 95 % interval, and in words what they have not. */
export function modelTable(learnt: LearntModel, profile: Profile, page: Page): string {
  const carries = profile.kind === 'lift' || profile.kind === 'arm';
  const names = MODEL_PARAMETERS.filter((name) => name !== 'hold' || carries);
  const rows = names.map((name) => {
    const { best, low, high } = learnt.intervals[name];
    const said = (value: number) => shown(name, value, profile);
    const range = learnt.unlearnt.includes(name) ? 'not learnt yet' : `${said(low)} to ${said(high)}`;
    return [NAMES[name], said(best), range, MEANINGS[name]];
  });
  const head = ['', 'best', '95 % of the time', ''];
  return set(
    [...table([head, ...rows], ['left', 'right', 'left', 'left'], page), '', ...notes(learnt, names, page)],
    page,
  );
}

function notes(learnt: LearntModel, names: readonly ModelParameter[], page: Page): readonly string[] {
  const fit =
    learnt.fit === null
      ? 'No log was read yet: these figures are the nameplate’s or a guess.'
      : `The model explains ${formatNumber(learnt.fit, 3)} % of what the logs show${learnt.usable ? '.' : ': too little to plan by.'}`;
  const unlearnt = names
    .filter((name) => learnt.unlearnt.includes(name))
    .map(
      (name) =>
        `The ${NAMES[name]} is not learnt: no log tells more of it than was guessed before. It takes ${TEACHES[name]}.`,
    );
  const asides = [
    ...(learnt.rowShift === 0
      ? []
      : [
          `The output column is ${learnt.rowShift} ${learnt.rowShift === 1 ? 'row' : 'rows'} out of step with the motion; that was put right.`,
        ]),
    ...(learnt.outputRebuilt ? ['A log had no output: it was rebuilt from the gains.'] : []),
    ...learnt.warnings,
  ];
  return [fit, ...unlearnt, ...asides].flatMap((text) => hanging('', text, page, 0));
}
