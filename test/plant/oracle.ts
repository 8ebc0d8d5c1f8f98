import { createRequire } from 'node:module';
import type { PlantModel } from '../../src/plant/response-model.ts';

// odex (Hairer & Wanner's Gragg-Bulirsch-Stoer integrator) ships without types that our module settings can read.
interface OdexSolver {
  absoluteTolerance: number | number[];
  relativeTolerance: number | number[];
  denseOutput: boolean;
  initialStepSize: number;
  maxStepSize: number;
  solve(
    f: (t: number, y: number[]) => number[],
    start: number,
    y: number[],
    end: number,
    onStep?: (n: number, from: number, to: number, y: number[], dense: (c: number, t: number) => number) => boolean,
  ): { y: number[] };
}
const { Solver } = createRequire(import.meta.url)('odex') as { Solver: new (n: number) => OdexSolver };

/** One smooth right-hand side and the functions of the state whose sign change ends it. */
export interface Mode {
  readonly slope: (t: number, y: number[]) => number[];
  readonly guards: readonly ((y: number[]) => number)[];
}

/**
 * Integrates a mode with odex from `from` to `to` at 1e-13, or to where a guard that was positive comes to zero: found on the dense
 * output, then integrated to anew.
 *
 * @param longestStep s; two sign changes of a guard within one step go unseen
 * @returns end time, state and the guard that ended it (−1 = none)
 */
export function integrate(
  mode: Mode,
  y0: number[],
  from: number,
  to: number,
  longestStep: number | null = null,
): { time: number; y: number[]; guard: number } {
  const solver = odex(y0.length);
  solver.denseOutput = true;
  if (longestStep !== null) solver.maxStepSize = longestStep;
  let found = { time: to, guard: -1 };
  const wasPositive = mode.guards.map((guard) => guard(y0) > 0);
  const end = solver.solve(mode.slope, from, [...y0], to, (_n, t0, t1, y, dense) => {
    for (let k = 0; k < mode.guards.length; k++) {
      const guard = mode.guards[k];
      if (!guard) continue;
      if (!wasPositive[k]) {
        wasPositive[k] = guard(y) > 0;
        continue;
      }
      if (guard(y) > 0) continue;
      let low = t0;
      let high = t1;
      for (let round = 0; round < 80; round++) {
        const middle = 0.5 * (low + high);
        if (guard(y.map((_, c) => dense(c, middle))) > 0) low = middle;
        else high = middle;
      }
      if (high < found.time || found.guard < 0) found = { time: high, guard: k };
    }
    return found.guard < 0;
  });
  if (found.guard < 0) return { time: to, y: end.y, guard: -1 };
  const y = found.time > from ? odex(y0.length).solve(mode.slope, from, [...y0], found.time).y : [...y0];
  return { ...found, y };
}

function odex(size: number): OdexSolver {
  const solver = new Solver(size);
  solver.absoluteTolerance = 1e-13;
  solver.relativeTolerance = 1e-13;
  solver.initialStepSize = 1e-4;
  return solver;
}

/**
 * The motor's force as the design states it, solved from Ohm's law and the supply's drop instead of from the closed form that the
 * solver uses: i = (u·V − w) limited, V = 1 − ρ·max(0, u·i), in units of the stall current and the open-circuit voltage.
 */
export function oracleForce(plant: PlantModel, u: number, speed: number): number {
  const w = speed / plant.response.topSpeed;
  const limit = plant.forceLimit ?? Number.POSITIVE_INFINITY;
  let low = -4;
  let high = 4;
  // The current that the voltage at that current would drive falls with the current, so there is one that agrees.
  for (let round = 0; round < 100; round++) {
    const i = 0.5 * (low + high);
    const driven = u * (1 - plant.sag * Math.max(0, u * i)) - w;
    if (driven > i) low = i;
    else high = i;
  }
  return Math.max(-limit, Math.min(limit, 0.5 * (low + high)));
}

/**
 * Moves a rigid plant under a held output with odex between events: an independent reading of the design's model, section 1 (stick
 * and slip, stops, gravity at any angle, sag, current limit).
 */
export function oracleAdvance(plant: PlantModel, state: number[], u: number, duration: number): number[] {
  const { response } = plant;
  const gain = response.topSpeed / response.lag;
  const min = plant.stops.min ?? Number.NEGATIVE_INFINITY;
  const max = plant.stops.max ?? Number.POSITIVE_INFINITY;
  const phi = 1 / (1 + plant.sag * u * u);
  const limit = plant.forceLimit ?? Number.POSITIVE_INFINITY;
  // Kinks of the force in the speed, where a smooth integrator has to start anew.
  const kinks = [u, u - limit / (u > 0 ? phi : 1), u + limit / (u < 0 ? phi : 1)]
    .filter(Number.isFinite)
    .map((w) => w * response.topSpeed);
  const weight = (x: number) => weightAt(plant, x);
  let [x = 0, v = 0] = state;
  let time = 0;
  for (let events = 0; time < duration && events < 60; events++) {
    if ((x >= max && v > 0) || (x <= min && v < 0)) v = 0;
    if (v === 0) {
      const net = oracleForce(plant, u, 0) - weight(x);
      const goes = net > response.breakaway ? 1 : net < -response.breakawayBack ? -1 : 0;
      if (goes === 0 || (goes > 0 && x >= max) || (goes < 0 && x <= min)) break;
      v = goes * 1e-300;
    }
    const sense = Math.sign(v);
    const drag = sense > 0 ? response.drag : -response.dragBack;
    const level = v;
    const end = integrate(
      {
        slope: (_t, [p = 0, s = 0]) => [s, gain * (oracleForce(plant, u, s) - weight(p) - drag)],
        guards: [
          ([, s = 0]) => sense * s,
          ([p = 0]) => (sense > 0 ? max - p : p - min),
          ...kinks.map(
            (kink) =>
              ([, s = 0]: number[]) =>
                level < kink ? kink - s : s - kink,
          ),
        ],
      },
      [x, v],
      time,
      duration,
    );
    time = end.time;
    [x = 0, v = 0] = end.y;
    if (end.guard === 0) v = 0;
    if (end.guard === 1) {
      x = sense > 0 ? max : min;
      v = 0;
    }
    if (end.guard >= 2) v = kinks[end.guard - 2] ?? v;
  }
  return [x, v];
}

function weightAt(plant: PlantModel, x: number): number {
  const { gravity, response } = plant;
  if (gravity.kind === 'none') return 0;
  if (gravity.kind === 'constant') return response.hold;
  return response.hold * Math.cos((x - gravity.level) * gravity.radiansPerUnit);
}
