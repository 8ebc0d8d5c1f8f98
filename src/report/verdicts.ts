import type { Verdict, VerdictName } from '../trial/verdict.ts';
import { hanging, type Page, set } from './page.ts';

/** What a person does about each verdict, in one sentence. Common practice, no source. */
export const REMEDIES: Readonly<Record<VerdictName, string>> = {
  settled: 'Leave the gains; prove them on the target’s other moves.',
  slow: 'Raise Kp if the output was not at its limit; else the motor is what is slow.',
  'stuck-short':
    'Let the sum work inside a zone a little wider than the resting error, or add hold where weight pulls.',
  overshoots: 'Lower Kp, or brake earlier with more Kd.',
  swings: 'Lower Kp, or add Kd; if Ki is on, try half of it.',
  'steady-swing': 'Lower Kp by a third before the next trial; look for play in the drive.',
  'growing-swing': 'Disable. Halve Kp before it is powered again.',
  hunting: 'Make the zone smaller or Ki lower: the sum pushes it out of rest again and again.',
  'wound-up': 'Make the zone smaller, limit the sum, or lower Ki: the sum was full before it arrived.',
  chatters: 'Lower Kd or filter the derivative: it acts on steps of the sensor.',
  saturated: 'More gain cannot help while the output is at its limit: allow more output, gear for it, or ask less.',
  late: 'Find the delay (sensor filter, slow loop, slow bus) before raising gains: dead time is what limits them.',
  reversed: 'Disable. Invert the motor or the sensor, then check the direction again.',
  deaf: 'Check that it is enabled, wired and geared: output went out and nothing moved.',
  frozen: 'Check the sensor and its cable: the output works and the reading does not change.',
  jumps: 'Check the sensor’s coupling and cable: the reading does what no machine can.',
  'wrong-scale': 'Check the sensor’s counts, the reduction and the unit in the profile.',
  'hit-a-stop': 'Give the move more room, or correct the limits in the profile.',
  sagging: 'Charge or change the battery, then repeat the trial before changing a gain.',
  'uneven-ticks': 'Find what holds up the loop: uneven ticks make Kd and Ki act unevenly.',
  'one-sided': 'Check hold and what drags in one direction: one set of gains meets two machines.',
  loose: 'Take the play out of the drive; no gain can.',
  'out-of-band': 'Find out what changed (battery, load, something that rubs) before you trust the next promise.',
  'out-of-reach': 'Ask for less or change the machine: no gains can meet this target.',
};

/** Verdicts, weightiest first, each with its reason and what to do about it. */
export function verdictLines(verdicts: readonly Verdict[], page: Page): string {
  if (verdicts.length === 0) return set(hanging('Verdict', 'Nothing out of the ordinary.', page), page);
  const lines = verdicts.flatMap(({ is, because }, k) => [
    ...hanging(k === 0 ? 'Verdict' : '', `${is}: ${because}`, page),
    ...hanging('', `→ ${REMEDIES[is]}`, page),
  ]);
  return set(lines, page);
}
