import type { Drive, Load, Machine, Motor } from './machine.ts';
import type { Coupling, Gravity, ResponseModel } from './response-model.ts';

/** Standard gravity, m/s² (3rd CGPM, 1901; ISO 80000-3). */
export const GRAVITY = 9.80665;

/** Taken where a profile does not know its friction; common practice, no source. */
const USUAL_DRAG = 0.05;
const USUAL_BREAKAWAY_OVER_DRAG = 1.3;

/** How a machine's SI numbers turn into a profile's own. */
export interface Frame {
  /** Along a line (the drive's radius turns rotation into travel) or about an axis. */
  readonly travel: 'line' | 'axis';
  readonly weight: Gravity['kind'];
  /** Metres (line) or radians (axis) in one unit of the profile; per second alike for a speed loop. */
  readonly unitToSi: number;
  /** Share of the supply that full output puts on the motor: 1 unless full output is in volts or short of full. */
  readonly fullDuty: number;
}

/** The force F = A·u − B·v of a machine, SI: newtons along a line, newton-metres about an axis. */
export interface ForceLine {
  /** A: force at stall and full output, stiff supply. */
  readonly stall: number;
  /** B: force lost per m/s or rad/s to the motors' own voltage. */
  readonly perSpeed: number;
  /** Moving mass, kg, or inertia, kg·m², with the rotors'. */
  readonly inertia: number;
  /** Share of it that turns with the motors, 0 when the rotors' inertia is not known. */
  readonly motorShare: number;
  /** Force of the weight (for an arm, when level). */
  readonly weight: number;
}

/** Electrical constants of one motor: Ω, N·m/A, V·s/rad. Its resistance takes its part of the free current's voltage. */
export function motorConstants(motor: Motor): { resistance: number; torque: number; backVoltage: number } {
  const resistance = motor.nominalVoltage / motor.stallCurrent;
  const freeSpeed = (motor.freeSpeed * 2 * Math.PI) / 60;
  return {
    resistance,
    torque: motor.stallTorque / motor.stallCurrent,
    backVoltage: (motor.nominalVoltage - motor.freeCurrent * resistance) / freeSpeed,
  };
}

function movingLoad(load: Load, drive: Drive, frame: Frame): { inertia: number; weight: number } | null {
  if (frame.travel === 'line') {
    if (load.mass === null || drive.radius === null) return null;
    return { inertia: load.mass, weight: frame.weight === 'none' ? 0 : load.mass * GRAVITY };
  }
  if (frame.weight === 'none') return load.inertia === null ? null : { inertia: load.inertia, weight: 0 };
  if (load.mass === null || load.centreOfMass === null) return null;
  // An arm of unknown inertia is taken as an even rod with its middle at the centre of mass: m·(2d)²/3.
  const inertia = load.inertia ?? (4 / 3) * load.mass * load.centreOfMass ** 2;
  return { inertia, weight: load.mass * GRAVITY * load.centreOfMass };
}

/**
 * Force line of a machine: A = n·kt·N·η·V/(R·r), B = n·kt·ke·N²·η/(R·r²), r = 1 about an axis, V the open-circuit voltage
 * times the frame's full duty. Without a supply the motors' nominal voltage is taken, stiff.
 *
 * @returns null when motor, drive or load lack a number that this needs
 */
export function forceLine(machine: Machine, frame: Frame): ForceLine | null {
  const { motor, drive, load } = machine;
  if (!motor || !drive || !load) return null;
  const moved = movingLoad(load, drive, frame);
  if (!moved) return null;
  const { resistance, torque, backVoltage } = motorConstants(motor);
  const ratio = drive.reduction / (frame.travel === 'line' ? (drive.radius ?? 1) : 1);
  const voltage = (machine.supply?.openCircuit ?? motor.nominalVoltage) * frame.fullDuty;
  const rotors = motor.count * (motor.rotorInertia ?? 0) * ratio ** 2;
  const inertia = moved.inertia + rotors;
  return {
    stall: (motor.count * torque * ratio * drive.efficiency * voltage) / resistance,
    perSpeed: (motor.count * torque * backVoltage * ratio ** 2 * drive.efficiency) / resistance,
    inertia,
    motorShare: rotors / inertia,
    weight: moved.weight,
  };
}

/**
 * Response model of a machine, closed form: K = A/B, τ = m/B, hold = weight/A, in the profile's unit. Unknown drag is taken
 * as 0.05 of full output, unknown breakaway as 1.3 × drag. Both directions alike; no delay of its own.
 *
 * @returns null when motor, drive or load lack a number that this needs
 */
export function responseOfMachine(machine: Machine, frame: Frame): ResponseModel | null {
  const line = forceLine(machine, frame);
  if (!line) return null;
  const drag = machine.friction?.drag ?? USUAL_DRAG;
  const breakaway = machine.friction?.breakaway ?? drag * USUAL_BREAKAWAY_OVER_DRAG;
  return {
    topSpeed: line.stall / line.perSpeed / frame.unitToSi,
    lag: line.inertia / line.perSpeed,
    drag,
    dragBack: drag,
    breakaway: Math.max(breakaway, drag),
    breakawayBack: Math.max(breakaway, drag),
    hold: line.weight / line.stall,
    delay: 0,
  };
}

/**
 * Sag of a machine's supply, n·R_s/R at full duty, and its current limit as a fraction of the force at stall and full
 * output; 0 and null without a supply.
 */
export function supplyOfMachine(machine: Machine, frame: Frame): { sag: number; forceLimit: number | null } {
  const { motor, supply } = machine;
  if (!motor || !supply) return { sag: 0, forceLimit: null };
  const { resistance } = motorConstants(motor);
  const { currentLimit, openCircuit } = supply;
  return {
    // The supply's current is duty × the motors' current, and the voltage it loses is duty × again at the motor: duty².
    sag: ((motor.count * supply.resistance) / resistance) * frame.fullDuty ** 2,
    forceLimit: currentLimit === null ? null : (currentLimit * resistance) / (openCircuit * frame.fullDuty),
  };
}

// Common practice, no source: gears that meet without a known stiffness are stiff against any loop that is tuned by hand.
const GEAR_CONTACT = { frequency: 250, damping: 0.3 };
const SPRING_DAMPING = 0.05;
const USUAL_MOTOR_SHARE = 0.2;

/**
 * Coupling between motor and load: null when the drive has neither backlash nor a stiffness. Without the rotors' inertia
 * a fifth of the moving mass is put on the motor's side; backlash without a stiffness meets at 250 rad/s.
 */
export function couplingOfMachine(machine: Machine, frame: Frame): Coupling | null {
  const line = forceLine(machine, frame);
  const backlash = machine.drive?.backlash ?? 0;
  const stiffness = machine.drive?.stiffness ?? null;
  if (!line || (backlash === 0 && stiffness === null)) return null;
  const motorShare = line.motorShare > 0 ? Math.min(0.95, Math.max(0.02, line.motorShare)) : USUAL_MOTOR_SHARE;
  const loadInertia = line.inertia * (1 - motorShare);
  return {
    backlash,
    frequency: stiffness === null ? GEAR_CONTACT.frequency : Math.sqrt(stiffness / loadInertia),
    damping: stiffness === null ? GEAR_CONTACT.damping : SPRING_DAMPING,
    motorShare,
  };
}
