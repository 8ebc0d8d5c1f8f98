import { fullOutput } from '../controller/settings.ts';
import { couplingOfMachine, type Frame, responseOfMachine, supplyOfMachine } from '../plant/from-machine.ts';
import type { Gravity, PlantModel, ResponseModel } from '../plant/response-model.ts';
import type { Profile } from './profile.ts';
import { unitScale } from './units.ts';

/**
 * How the weight of a profile's mechanism acts along its travel, whether or not the machine's numbers are known: constant for
 * a lift, with the cosine of reading − levelAngle for an arm (level at 0 when unknown), none for the others.
 */
export function gravityOf(profile: Profile): Gravity {
  if (profile.kind === 'lift') return { kind: 'constant' };
  if (profile.kind !== 'arm') return { kind: 'none' };
  return { kind: 'cosine', level: profile.load?.levelAngle ?? 0, radiansPerUnit: unitScale(profile.unit).toSi };
}

/**
 * Share of the supply that full output puts on the motor. Output in volts is taken as duty × supply with duty = volts over the
 * open-circuit voltage (the motor's nominal one when there is no supply): a controller that asks for volts does not know the sag.
 */
function fullDutyOf(profile: Profile): number {
  const full = fullOutput(profile.controller);
  const { unit } = profile.controller.output;
  if (unit === 'fraction') return full;
  if (unit === 'percent') return full / 100;
  return full / (profile.supply?.openCircuit ?? profile.motor?.nominalVoltage ?? full);
}

/** Null when the unit cannot measure this kind of travel (metres of a joint). A line read in turns goes through the radius. */
function frameOf(profile: Profile): Frame | null {
  const travel = profile.kind === 'travel' || profile.kind === 'lift' ? 'line' : 'axis';
  const { dimension, toSi } = unitScale(profile.unit);
  const weight = gravityOf(profile).kind;
  const fullDuty = fullDutyOf(profile);
  if (travel === 'axis') return dimension === 'angle' ? { travel, weight, unitToSi: toSi, fullDuty } : null;
  if (dimension === 'length') return { travel, weight, unitToSi: toSi, fullDuty };
  const radius = profile.drive?.radius ?? null;
  return radius === null ? null : { travel, weight, unitToSi: toSi * radius, fullDuty };
}

/**
 * Nameplate response model of a profile, in its own unit and as fractions of its full output.
 *
 * @returns null when motor, drive or load lack a number that this needs
 */
export function responseOf(profile: Profile): ResponseModel | null {
  const frame = frameOf(profile);
  return frame && responseOfMachine(profile, frame);
}

/**
 * Everything the solver needs to move a profile's mechanism by its nameplate: response, gravity, stops, supply, coupling. The
 * sensor is not in it.
 *
 * @returns null when motor, drive or load lack a number that this needs
 */
export function plantModelOf(profile: Profile): PlantModel | null {
  const frame = frameOf(profile);
  const response = frame && responseOfMachine(profile, frame);
  if (!response) return null;
  return {
    ...supplyOfMachine(profile, frame),
    ...boundsOf(profile),
    response,
    coupling: couplingOfMachine(profile, frame),
  };
}

/**
 * What of a plant does not depend on its response model: quantity, gravity and stops. With a learnt response, a stiff supply
 * and no coupling it makes a plant for a profile whose machine numbers are unknown.
 */
function boundsOf(profile: Profile): Pick<PlantModel, 'quantity' | 'gravity' | 'stops'> {
  const { min, max } = profile.limits;
  return {
    quantity: profile.quantity,
    gravity: gravityOf(profile),
    stops: profile.quantity === 'position' ? { min, max } : { min: null, max: null },
  };
}

/**
 * A plant that answers as `response` says: bounded as the profile is, and, where the machine is known, with its sag, current
 * limit and coupling.
 */
export function plantWith(profile: Profile, response: ResponseModel): PlantModel {
  return { ...framePlant(profile), response };
}

/**
 * Plants that answer as each response says, with lost motion and spring left out: what is rehearsed and promised by the hundred.
 * The profile's own part is worked out once.
 */
export function rigidPlants(profile: Profile, responses: readonly ResponseModel[]): readonly PlantModel[] {
  const frame = framePlant(profile);
  return responses.map((response) => ({ ...frame, response, coupling: null }));
}

/** All of a plant but its response. */
function framePlant(profile: Profile): Omit<PlantModel, 'response'> {
  return plantModelOf(profile) ?? { ...boundsOf(profile), sag: 0, forceLimit: null, coupling: null };
}
