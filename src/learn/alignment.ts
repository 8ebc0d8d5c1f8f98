import type { Profile } from '../mechanism/profile.ts';
import type { Drive } from './evidence.ts';
import { type Fitted, fitModel } from './fit.ts';
import type { LearntModel } from './learnt.ts';
import type { Coordinates } from './parameters.ts';

export interface AlignmentRequest {
  readonly drives: readonly Drive[];
  readonly profile: Profile;
  readonly coordinates: Coordinates;
  readonly from: Pick<LearntModel, 'response' | 'rowShift'> | null;
}

/** A dead time below this share of the period may hide that the output acted earlier than its row says. */
const PRESSED = 0.35;

/** A fit that leaves no more than so many times the sensor's own has nothing to gain from other rows. */
const NOTHING_TO_GAIN = 1.5;

/** How much smaller the shifted rows' sum of squares must be before they are believed. */
const SHIFT_GAIN = 0.6;

/**
 * Fits with the logged output as it stands, and, where that leaves more than it should and presses the dead time against zero, one row
 * earlier: some loggers write in row k the output that acted on the interval which ends there.
 */
export function alignedFit(request: AlignmentRequest): { readonly fitted: Fitted; readonly rowShift: number } {
  const { drives, profile, coordinates, from } = request;
  const starts = from === null ? [] : [from.response];
  const fitWith = (rowShift: number) => fitModel({ drives, profile, coordinates, rowShift, starts });
  if ((from?.rowShift ?? 0) > 0) return { fitted: fitWith(1), rowShift: 1 };
  const plain = fitWith(0);
  // A rebuilt output has no row to be wrong.
  const isPressed =
    plain.response.delay < PRESSED * profile.controller.period && drives.every(({ rebuilt }) => !rebuilt);
  const excess = Math.max(
    ...drives.map(({ floor }, index) => (plain.weighing.sigma[index] ?? 0) / Math.max(floor, 1e-12)),
  );
  if (!isPressed || excess < NOTHING_TO_GAIN) return { fitted: plain, rowShift: 0 };
  const moved = fitModel({ drives, profile, coordinates, rowShift: 1, starts: [] });
  return misfitOf(moved) < SHIFT_GAIN * misfitOf(plain)
    ? { fitted: moved, rowShift: 1 }
    : { fitted: plain, rowShift: 0 };
}

/** Sum of squares of what a fit leaves, each trial in its sensor's floor. */
function misfitOf({ problem, response }: Fitted): number {
  const answers = problem.answers.of(response);
  let sum = 0;
  problem.drives.forEach(({ measured, information }, index) => {
    const answer = answers[index];
    for (let row = 0; row < measured.length; row++) {
      sum += (information[row] ?? 0) * ((measured[row] ?? 0) - (answer?.[row] ?? 0)) ** 2;
    }
  });
  return sum;
}
