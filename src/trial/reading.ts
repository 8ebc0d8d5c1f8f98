import { fullOutput } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { Samples } from '../record/samples.ts';
import { courseOf, straightMove } from './course.ts';
import { type Figures, figuresAlong } from './figures.ts';
import type { Verdict } from './verdict.ts';
import { overshoots, settled, slow, stuckShort } from './verdicts/ending.ts';
import type { Look, Rule } from './verdicts/look.ts';
import { hitAStop, loose, oneSided, outOfBand, outOfReach } from './verdicts/machine.ts';
import { chatters, sagging, saturated, woundUp } from './verdicts/sending.ts';
import { deaf, frozen, jumps, reversed, wrongScale } from './verdicts/sensing.ts';
import { hunting, swinging } from './verdicts/swings.ts';
import { late, unevenTicks } from './verdicts/timing.ts';

/** Rules in the order of their weight: what must be mended first comes first. A new verdict is one line here. */
const RULES: readonly Rule[] = [
  reversed,
  deaf,
  frozen,
  jumps,
  wrongScale,
  hitAStop,
  outOfReach,
  swinging,
  hunting,
  stuckShort,
  woundUp,
  overshoots,
  chatters,
  slow,
  settled,
  late,
  saturated,
  loose,
  oneSided,
  outOfBand,
  sagging,
  unevenTicks,
];

/** What a trial is read with; `Look` less what is worked out from the samples. */
export type ReadingContext = Omit<Look, 'samples' | 'course' | 'figures'>;

export interface Reading {
  readonly figures: Figures;
  /** Most important first. */
  readonly verdicts: readonly Verdict[];
  /** Does it meet the target on its own move? */
  readonly meets: boolean;
}

/** Figures and verdicts of one recorded move. @throws {RangeError} when the record has fewer than two rows */
export function readTrial(samples: Samples, context: ReadingContext): Reading {
  const { profile } = context;
  const move = straightMove(context.move, profile.continuous);
  const full = fullOutput(profile.controller);
  const course = courseOf(samples, move, profile.continuous);
  const figures = figuresAlong(course, samples, {
    move,
    tolerance: profile.target.tolerance,
    continuous: profile.continuous,
    outputLimit: context.outputCap * full,
    fullOutput: full,
    resolution: profile.sensor?.resolution ?? 0,
  });
  const look: Look = { ...context, move, samples, figures, course };
  const verdicts = RULES.flatMap((rule) => rule(look) ?? []);
  return { figures, verdicts, meets: meetsTarget(figures, verdicts, profile, move) };
}

/** Settling time and overshoot within the target, and nothing that swings on. One step of the sensor past the target is forgiven. */
function meetsTarget(figures: Figures, verdicts: readonly Verdict[], profile: Profile, move: Look['move']): boolean {
  const { target, sensor } = profile;
  const size = Math.abs(move.to - move.from) || 1;
  const step = (100 * 1.01 * (sensor?.resolution ?? 0)) / size;
  const swings = verdicts.some(({ is }) => is === 'growing-swing' || is === 'hunting');
  return (
    figures.settlingTime !== null &&
    figures.settlingTime <= target.settlingTime &&
    figures.overshoot <= Math.max(target.overshoot, step) &&
    !swings
  );
}
