import type { Gains } from '../controller/settings.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { PlantModel } from '../plant/response-model.ts';
import { type QuickFigures, quickFigures } from '../trial/quick-figures.ts';
import { createTrialRunner, type TrialColumns } from '../trial/runner.ts';
import { readingOf } from '../trial/simulate.ts';

/** Runs trials on plants that may be the real one, and measures them; one allocation for thousands of trials. */
export interface Rehearsal {
  /** The figures hold until the next run. */
  readonly run: (plant: PlantModel, gains: Gains, move: Move, outputCap: number) => QuickFigures;
  /** Columns and rows of the trial run last. */
  readonly last: () => { readonly columns: TrialColumns; readonly rows: number };
}

/**
 * Prepares rehearsals of a profile's loop with its own sensor, noise included and the same in each.
 *
 * @param tolerance  half-width that counts as settled, profile unit
 */
export function rehearsalOf(profile: Profile, duration: number, tolerance: number, seed: number): Rehearsal {
  const runner = createTrialRunner({
    controller: profile.controller,
    reading: readingOf(profile),
    duration,
    continuous: profile.continuous,
    shape: null,
    seed,
    lostBeyond: 20,
  });
  let rows = 0;
  return {
    run: (plant, gains, move, outputCap) => {
      rows = runner.run(plant, gains, move, outputCap);
      return quickFigures(runner.columns, rows, {
        move,
        tolerance,
        continuous: profile.continuous,
        resolution: profile.sensor?.resolution ?? 0,
        controller: profile.controller,
      });
    },
    last: () => ({ columns: runner.columns, rows }),
  };
}
