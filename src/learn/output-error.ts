import { plantWith } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import { respondInto } from '../plant/respond.ts';
import type { PlantModel, ResponseModel } from '../plant/response-model.ts';
import type { Drive } from './evidence.ts';

/** Simulated answers of a model to the drives of several trials, in reusable columns. */
export interface Answers {
  /** Fills one column a trial; valid until the next call. */
  readonly of: (response: ResponseModel) => readonly Float64Array[];
}

/**
 * Prepares the answers of response models to trials: the mechanism driven by the logged output, never corrected by a reading.
 *
 * @param rowShift rows by which the logged output is moved earlier: 1 when the output of a row acted on the interval that
 *                 ends there
 */
export function answersTo(drives: readonly Drive[], profile: Profile, rowShift: number): Answers {
  const sensorDelay = profile.sensor?.delay ?? 0;
  const nameplate = plantWith(profile, NEUTRAL);
  const prepared = drives.map((drive) => ({
    drive,
    bounds: boundsFor(nameplate, drive),
    output: shiftedRows(drive.output, rowShift),
    column: new Float64Array(drive.time.length),
  }));
  const columns = prepared.map(({ column }) => column);
  return {
    of: (response) => {
      const seen = sensorDelay > 0 ? { ...response, delay: response.delay + sensorDelay } : response;
      for (const { drive, bounds, output, column } of prepared) {
        respondInto(column, { ...bounds, response: seen }, drive.start, drive.time, output);
      }
      return columns;
    },
  };
}

const NEUTRAL: ResponseModel = {
  topSpeed: 1,
  lag: 1,
  drag: 0,
  dragBack: 0,
  breakaway: 0,
  breakawayBack: 0,
  hold: 0,
  delay: 0,
};

/** Rigid, with the profile's bounds: what a log cannot tell from lag and dead time is not in the model. */
function boundsFor(nameplate: PlantModel, drive: Drive): PlantModel {
  return {
    ...nameplate,
    quantity: drive.quantity,
    stops: drive.quantity === 'position' ? nameplate.stops : { min: null, max: null },
    coupling: null,
    sag: drive.supplied ? 0 : nameplate.sag,
  };
}

/** A column moved earlier by so many rows; the last value is kept. */
export function shiftedRows(output: Float64Array, rows: number): Float64Array {
  if (rows === 0) return output;
  const last = output.length - 1;
  return output.map((_, row) => output[Math.min(last, row + rows)] ?? 0);
}

/** 100·(1 − ‖y − ŷ‖ / ‖y − mean y‖) over all trials, rows without a reading left out; design's model and the data's README. */
export function fitPercent(drives: readonly Drive[], answers: readonly Float64Array[]): number {
  let missed = 0;
  let spread = 0;
  drives.forEach(({ measured, information }, index) => {
    const answer = answers[index];
    if (!answer) return;
    const rows = Array.from(measured.keys()).filter((row) => (information[row] ?? 0) > 0);
    const mean = rows.reduce((sum, row) => sum + (measured[row] ?? 0), 0) / Math.max(1, rows.length);
    for (const row of rows) {
      missed += ((measured[row] ?? 0) - (answer[row] ?? 0)) ** 2;
      spread += ((measured[row] ?? 0) - mean) ** 2;
    }
  });
  return spread === 0 ? 0 : 100 * (1 - Math.sqrt(missed / spread));
}
