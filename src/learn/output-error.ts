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
 * Prepares the answers of response models to trials.
 *
 * @param rowShift rows by which the logged output is moved earlier: 1 when the output of a row acted on the interval that
 *                 ends there
 */
export function answersTo(drives: readonly Drive[], profile: Profile, rowShift: number): Answers {
  const columns = drives.map((drive) => new Float64Array(drive.time.length));
  const outputs = drives.map((drive) => shifted(drive.output, rowShift));
  const sensorDelay = profile.sensor?.delay ?? 0;
  const nameplate = plantWith(profile, NEUTRAL);
  return {
    of: (response) => {
      drives.forEach((drive, index) => {
        const column = columns[index];
        const output = outputs[index];
        if (!column || !output) return;
        respondInto(column, plantFor(nameplate, response, drive, sensorDelay), drive.start, drive.time, output);
      });
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

/** Rigid, with the profile's bounds; dead time includes the sensor's, which a log cannot tell apart. */
function plantFor(nameplate: PlantModel, response: ResponseModel, drive: Drive, sensorDelay: number): PlantModel {
  return {
    ...nameplate,
    response: sensorDelay > 0 ? { ...response, delay: response.delay + sensorDelay } : response,
    coupling: null,
    sag: drive.supplied ? 0 : nameplate.sag,
  };
}

function shifted(output: Float64Array, rows: number): Float64Array {
  if (rows === 0) return output;
  const last = output.length - 1;
  return output.map((_, row) => output[Math.min(last, row + rows)] ?? 0);
}

/** 100·(1 − ‖y − ŷ‖ / ‖y − mean y‖) over all trials; design's model and the data's README. */
export function fitPercent(drives: readonly Drive[], answers: readonly Float64Array[]): number {
  let missed = 0;
  let spread = 0;
  drives.forEach((drive, index) => {
    const answer = answers[index];
    if (!answer) return;
    let mean = 0;
    for (const value of drive.measured) mean += value / drive.measured.length;
    for (let row = 0; row < answer.length; row++) {
      const value = drive.measured[row] ?? 0;
      missed += (value - (answer[row] ?? 0)) ** 2;
      spread += (value - mean) ** 2;
    }
  });
  return spread === 0 ? 0 : 100 * (1 - Math.sqrt(missed / spread));
}
