import type { Coupling, PlantModel } from './response-model.ts';
import { motorForce, type RigidLaw, rigidLawOf } from './rigid-law.ts';
import { findRoot } from './root.ts';
import { rungeKutta } from './runge-kutta.ts';

/**
 * Motor and load as two masses with lost motion or a spring between. `position` and `speed` are the load's, which carries the
 * sensor, the weight, the stops and the drag; the motor's side has the motor's own force only. Changed in place by
 * {@link advanceCoupled}.
 */
export interface CoupledMotion {
  /** Without weight. */
  readonly law: RigidLaw;
  readonly coupling: Coupling;
  readonly weight: number;
  /** Reading at which the weight is whole, and radians in a unit from there; 0 rad = a constant weight. */
  readonly level: number;
  readonly radiansPerUnit: number;
  /** Longest sub-step, s. */
  readonly subStep: number;
  position: number;
  speed: number;
  motorPosition: number;
  motorSpeed: number;
  /** Side of the gap that is closed: 1 (the motor pushes forward), −1, or 0 while neither is. Always 1 without a gap. */
  contact: number;
  /** Way in which the load, at rest still, has just been torn off; else 0. */
  tornOff: number;
}

/** What stays the same until the next event. */
interface Mode {
  readonly u: number;
  readonly contact: number;
  /** Way the load goes; 0 = it rests. */
  readonly direction: number;
}

// Share of the fastest of the coupling's swing, its damping and the motor's own lag in a sub-step; accuracy: test/plant/coupled.test.ts.
const SUB_STEP = 0.2;

/** Puts both masses at the start, the coupling wound up as far as carries the weight. */
export function startCoupled(
  plant: PlantModel,
  coupling: Coupling,
  start: { readonly position: number; readonly speed: number },
): CoupledMotion {
  const { gravity, response } = plant;
  const { frequency, damping, motorShare, backlash } = coupling;
  const law = rigidLawOf({ ...plant, gravity: { kind: 'none' } });
  const fastest = Math.max(
    frequency / Math.sqrt(motorShare),
    (2 * damping * frequency) / motorShare,
    1 / (motorShare * response.lag),
  );
  const motion: CoupledMotion = {
    law,
    coupling,
    weight: gravity.kind === 'none' ? 0 : response.hold,
    level: gravity.kind === 'cosine' ? gravity.level : 0,
    radiansPerUnit: gravity.kind === 'cosine' ? gravity.radiansPerUnit : 0,
    subStep: SUB_STEP / fastest,
    position: start.position,
    speed: start.speed,
    motorPosition: start.position,
    motorSpeed: start.speed,
    contact: 1,
    tornOff: 0,
  };
  const drag = start.speed > 0 ? law.againstForward : start.speed < 0 ? law.againstBack : 0;
  const carried = weightAt(motion, start.position) + drag;
  const side = Math.sign(carried);
  motion.contact = backlash > 0 ? side : 1;
  motion.motorPosition += (scaleOf(law) * carried) / ((1 - motorShare) * frequency ** 2) + 0.5 * side * backlash;
  return motion;
}

/** Acceleration of the whole mass by full output's force at stall, unit/s². */
function scaleOf(law: RigidLaw): number {
  return law.topSpeed / law.lag;
}

/** Output that carries the weight at `position`. */
function weightAt(motion: CoupledMotion, position: number): number {
  return motion.weight * Math.cos((position - motion.level) * motion.radiansPerUnit);
}

/** Force through the coupling when the gap is closed on a side: fraction of the force at stall and full output; y as in {@link State}. */
function forceOn(motion: CoupledMotion, side: number, y: Float64Array): number {
  const [xm = 0, vm = 0, x = 0, v = 0] = y;
  const { frequency, damping, motorShare, backlash } = motion.coupling;
  const stretch = xm - x - 0.5 * side * backlash;
  return ((1 - motorShare) * (frequency ** 2 * stretch + 2 * damping * frequency * (vm - v))) / scaleOf(motion.law);
}

const MOST_EVENTS = 20;
// Beyond it a coupling is as good as rigid, and should be given as such.
const MOST_STEPS = 20_000;

/**
 * Moves a coupled mechanism under a held output: classical Runge–Kutta in sub-steps, cut at every event (the gap closes or opens,
 * the load sticks, sets off or hits a stop), whose time is found on the step itself. Kinks of the motor's force (current limit,
 * sag) are not events.
 *
 * @param u output, fraction of full output
 * @param duration s, ≥ 0
 */
export function advanceCoupled(motion: CoupledMotion, u: number, duration: number): void {
  const steps = Math.min(MOST_STEPS, Math.max(1, Math.ceil(duration / motion.subStep)));
  for (let step = 0; step < steps; step++) {
    let left = duration / steps;
    for (let events = 1; left > 0; events++) left -= advanceToEvent(motion, u, left, events < MOST_EVENTS);
  }
}

/**
 * Moves to the next event, or for `left`; returns the time used.
 *
 * @param isWatched false lets events pass: faces that chatter at rest would hold up the time for ever
 */
function advanceToEvent(motion: CoupledMotion, u: number, left: number, isWatched: boolean): number {
  const from = Float64Array.of(motion.motorPosition, motion.motorSpeed, motion.position, motion.speed);
  const mode: Mode = { u, contact: motion.contact, direction: directionOf(motion, from) };
  motion.tornOff = 0;
  const slope = (y: Float64Array, into: Float64Array) => slopeIn(motion, mode, y, into);
  const guards = isWatched ? guardsOf(motion, mode) : [];
  let end = rungeKutta(slope, from, left);
  let time = left;
  let tripped: Guard | null = null;
  for (const guard of guards) {
    if (guard.margin(end) >= 0) continue;
    // A margin that starts at nil (just set off, just parted) is one that this step leaves the right way, or at once.
    const at = guard.margin(from) > 0 ? findRoot((t) => guard.margin(rungeKutta(slope, from, t)), 0, time) : 0;
    if (tripped && at >= time) continue;
    time = at;
    tripped = guard;
    end = rungeKutta(slope, from, at);
  }
  [motion.motorPosition = 0, motion.motorSpeed = 0, motion.position = 0, motion.speed = 0] = end;
  if (mode.direction === 0) motion.speed = 0;
  tripped?.happens();
  return time;
}

/** What ends a mode: a margin that is no longer ≥ 0, and what happens then. */
interface Guard {
  readonly margin: (y: Float64Array) => number;
  readonly happens: () => void;
}

function guardsOf(motion: CoupledMotion, mode: Mode): readonly Guard[] {
  const { law, coupling } = motion;
  const guards: Guard[] = [];
  if (mode.direction !== 0) {
    const stop = mode.direction > 0 ? law.max : law.min;
    const rest = () => {
      motion.speed = 0;
    };
    guards.push({ margin: (y) => mode.direction * (y[3] ?? 0), happens: rest });
    guards.push({
      margin: (y) => mode.direction * (stop - (y[2] ?? 0)),
      happens: () => {
        motion.position = stop;
        motion.speed = 0;
      },
    });
  } else {
    const tears = (way: number) => () => {
      motion.tornOff = way;
    };
    if (motion.position < law.max) {
      guards.push({ margin: (y) => law.startForward - netOn(motion, mode, y), happens: tears(1) });
    }
    if (motion.position > law.min) {
      guards.push({ margin: (y) => netOn(motion, mode, y) - law.startBack, happens: tears(-1) });
    }
  }
  if (coupling.backlash === 0) return guards;
  if (mode.contact !== 0) {
    guards.push({
      margin: (y) => mode.contact * forceOn(motion, mode.contact, y),
      happens: () => {
        motion.contact = 0;
      },
    });
    return guards;
  }
  for (const side of [1, -1]) {
    guards.push({
      // Open while there is a gap left, or while the faces part.
      margin: (y) =>
        Math.max(0.5 * coupling.backlash - side * ((y[0] ?? 0) - (y[2] ?? 0)), -side * forceOn(motion, side, y)),
      happens: () => {
        motion.contact = side;
      },
    });
  }
  return guards;
}

/** Force on the load, less its weight. */
function netOn(motion: CoupledMotion, mode: Mode, y: Float64Array): number {
  const through = mode.contact === 0 ? 0 : forceOn(motion, motion.coupling.backlash > 0 ? mode.contact : 0, y);
  return through - weightAt(motion, y[2] ?? 0);
}

/** Way the load goes, or sets off from rest; 0 when friction or a stop keeps it. */
function directionOf(motion: CoupledMotion, y: Float64Array): number {
  if (motion.speed !== 0) return Math.sign(motion.speed);
  if (motion.tornOff !== 0) return motion.tornOff;
  const { law } = motion;
  const net = netOn(motion, { u: 0, contact: motion.contact, direction: 0 }, y);
  if (net > law.startForward) return motion.position < law.max ? 1 : 0;
  if (net < law.startBack) return motion.position > law.min ? -1 : 0;
  return 0;
}

/** Rates of motor position and speed, load position and speed. */
function slopeIn(motion: CoupledMotion, mode: Mode, y: Float64Array, into: Float64Array): void {
  const { law, coupling } = motion;
  const scale = scaleOf(law);
  const vm = y[1] ?? 0;
  const net = netOn(motion, mode, y);
  const through = net + weightAt(motion, y[2] ?? 0);
  into[0] = vm;
  into[1] = (scale / coupling.motorShare) * (motorForce(law, mode.u, vm) - through);
  into[2] = mode.direction === 0 ? 0 : (y[3] ?? 0);
  const drag = mode.direction > 0 ? law.againstForward : law.againstBack;
  into[3] = mode.direction === 0 ? 0 : (scale / (1 - coupling.motorShare)) * (net - drag);
}
