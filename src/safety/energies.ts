import { gravityOf } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import { unitScale } from '../mechanism/units.ts';
import { GRAVITY } from '../plant/from-machine.ts';

const isLine = ({ kind }: Profile) => kind === 'travel' || kind === 'lift';

/** Metres of travel (a line) or radians (a joint) in one profile unit; null for a line read in turns of an unknown radius. */
function siOf(profile: Profile): number | null {
  const { dimension, toSi } = unitScale(profile.unit);
  if (!isLine(profile) || dimension === 'length') return toSi;
  const radius = profile.drive?.radius ?? null;
  return radius === null ? null : toSi * radius;
}

/** ½·m·v², J. */
export function energyOfMass(mass: number, speed: number): number {
  return 0.5 * mass * speed ** 2;
}

/**
 * Kinetic energy, J: ½·m·v² or ½·J·ω², with the rotors' share through the reduction where it is known.
 *
 * @param speed profile unit/s, or the quantity itself for a speed loop
 * @returns null when mass or inertia is not known
 */
export function kineticEnergy(profile: Profile, speed: number): number | null {
  const own = isLine(profile) ? (profile.load?.mass ?? null) : inertiaOf(profile);
  const scale = siOf(profile);
  return own === null || scale === null ? null : energyOfMass(own + (rotorShare(profile) ?? 0), speed * scale);
}

/** What the rotors add to the moving mass (kg) or inertia (kg·m²): n·J·N²/r², r = 1 about a joint; null when not known. */
export function rotorShare({ motor, drive, kind }: Profile): number | null {
  const radius = kind === 'travel' || kind === 'lift' ? (drive?.radius ?? null) : 1;
  if (motor?.rotorInertia == null || drive === null || radius === null) return null;
  return motor.count * motor.rotorInertia * (drive.reduction / radius) ** 2;
}

/** About the joint; an arm of unknown inertia is taken as an even rod with its middle at the centre of mass, as the plant is. */
function inertiaOf({ load }: Profile): number | null {
  if (load === null) return null;
  if (load.inertia !== null) return load.inertia;
  return load.mass === null || load.centreOfMass === null ? null : (4 / 3) * load.mass * load.centreOfMass ** 2;
}

export interface Drop {
  /** m. */
  readonly height: number;
  /** J. */
  readonly energy: number;
  /** s; nothing that falls is sooner. */
  readonly time: number;
}

/** A free fall: m·g·h and √(2h/g), g = 9.80665 m/s². */
export function freeFall(mass: number, height: number): Drop {
  return { height, energy: mass * GRAVITY * height, time: Math.sqrt((2 * height) / GRAVITY) };
}

/**
 * The drop of a lift's load or an arm's centre of mass from the highest place it gets to, to the lowest it can fall to.
 *
 * @param reach where the trial may take it, profile unit; null = anywhere between its limits
 * @returns null when it cannot fall, or a limit or the load is not known
 */
export function dropOf(profile: Profile, reach: readonly [low: number, high: number] | null): Drop | null {
  const { load, limits, kind } = profile;
  const scale = siOf(profile);
  if (load?.mass == null || limits.min === null || scale === null) return null;
  const whole = limits.max === null ? null : ([limits.min, limits.max] as const);
  const stretch = reach ?? whole;
  if (stretch === null) return null;
  const height = kind === 'lift' ? (stretch[1] - limits.min) * scale : armHeight(profile, stretch, whole);
  return height === null || height <= 0 ? null : freeFall(load.mass, height);
}

function armHeight(
  profile: Profile,
  reach: readonly [number, number],
  whole: readonly [number, number] | null,
): number | null {
  const gravity = gravityOf(profile);
  const arm = profile.load?.centreOfMass ?? null;
  if (gravity.kind !== 'cosine' || arm === null || whole === null) return null;
  const angle = (reading: number) => (reading - gravity.level) * gravity.radiansPerUnit;
  const top = mostSine(angle(reach[0]), angle(reach[1]));
  const bottom = -mostSine(-angle(whole[1]), -angle(whole[0]));
  return arm * (top - bottom);
}

/** Largest sine between two angles, rad. */
function mostSine(low: number, high: number): number {
  const crest = Math.PI / 2 + 2 * Math.PI * Math.ceil((low - Math.PI / 2) / (2 * Math.PI));
  return crest <= high ? 1 : Math.max(Math.sin(low), Math.sin(high));
}

/** m/s at the rim of what spins; null when its radius is not known. */
export function rimSpeedOf(profile: Profile, speed: number): number | null {
  const radius = profile.drive?.radius ?? null;
  if (profile.kind !== 'spin' || radius === null) return null;
  return speed * unitScale(profile.unit).toSi * radius;
}
