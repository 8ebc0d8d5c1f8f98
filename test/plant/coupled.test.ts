import { expect, test } from 'vitest';
import { respond } from '../../src/plant/respond.ts';
import type { Coupling, PlantModel } from '../../src/plant/response-model.ts';
import { integrate, type Mode, oracleForce } from './oracle.ts';
import { type Draws, drawsOf, randomPlant } from './random-plant.ts';

function randomCoupled(draws: Draws): PlantModel & { coupling: Coupling } {
  const plant = randomPlant(draws, draws.chance(0.5) ? 'none' : 'constant');
  const friction = { drag: 0.01, breakaway: 0.012, dragBack: 0.01, breakawayBack: 0.012 }; // with none at all the oracle cannot tell rest from a start
  return {
    ...plant,
    quantity: 'position',
    sag: 0,
    forceLimit: null,
    response: {
      ...plant.response,
      lag: draws.log(0.03, 0.5),
      ...(plant.response.drag === 0 || plant.response.dragBack === 0 ? friction : {}),
    },
    coupling: {
      backlash: draws.chance(0.5) ? 0 : plant.response.topSpeed * draws.log(0.001, 0.02),
      frequency: draws.log(20, 150),
      damping: draws.log(0.05, 0.5),
      motorShare: draws.even(0.1, 0.7),
    },
  };
}

/**
 * Two masses under a held output with odex between events, from the equations: μ·dv_m/dt = g·(u − v_m/K) − f, (1 − μ)·dv/dt = f − g·(h + c·sgn v),
 * f = (1 − μ)·(ω²·stretch + 2ζω·(v_m − v)), g = K/τ, and no pull across an open gap.
 */
function oracleCoupled(
  plant: PlantModel & { coupling: Coupling },
  state: { y: number[]; side: number },
  u: number,
  duration: number,
): { y: number[]; side: number } {
  const { response, coupling, stops } = plant;
  const gain = response.topSpeed / response.lag;
  const half = coupling.backlash / 2;
  const share = coupling.motorShare;
  const hold = plant.gravity.kind === 'constant' ? response.hold : 0;
  const spring = ([a = 0, va = 0, b = 0, vb = 0]: number[], side: number) =>
    (1 - share) *
    (coupling.frequency ** 2 * (a - b - side * half) + 2 * coupling.damping * coupling.frequency * (va - vb));
  let y = [...state.y];
  let { side } = state;
  let time = 0;
  let torn = 0;
  for (let events = 0; time < duration && events < 200; events++) {
    // A stop that takes the load's speed at once can leave the faces parting.
    if (half > 0 && side !== 0 && side * spring(y, side) < -1e-9) side = 0;
    const now = side;
    const force = (s: number[]) => (now === 0 ? 0 : spring(s, now));
    const net = (s: number[]) => force(s) / gain - hold;
    let way = Math.sign(y[3] ?? 0) || torn;
    if (way === 0) way = net(y) > response.breakaway ? 1 : net(y) < -response.breakawayBack ? -1 : 0;
    const stop = way > 0 ? (stops.max ?? 1e9) : (stops.min ?? -1e9);
    if (way !== 0 && way * (stop - (y[2] ?? 0)) <= 0) {
      way = 0;
      y[3] = 0;
    }
    torn = 0;
    const drag = way > 0 ? response.drag : -response.dragBack;
    const guards: Mode['guards'][number][] = [];
    const happens: (() => void)[] = [];
    const on = (guard: (s: number[]) => number, then: () => void) => {
      guards.push(guard);
      happens.push(then);
    };
    if (way !== 0) {
      on(
        (s) => way * (s[3] ?? 0),
        () => {
          y[3] = 0;
        },
      );
      on(
        (s) => way * (stop - (s[2] ?? 0)),
        () => {
          y[2] = stop;
          y[3] = 0;
        },
      );
    } else {
      if ((y[2] ?? 0) < (stops.max ?? 1e9))
        on(
          (s) => response.breakaway - net(s),
          () => {
            torn = 1;
          },
        );
      if ((y[2] ?? 0) > (stops.min ?? -1e9))
        on(
          (s) => response.breakawayBack + net(s),
          () => {
            torn = -1;
          },
        );
    }
    const closed = side;
    if (half > 0 && side !== 0)
      on(
        (s) => closed * spring(s, closed),
        () => {
          side = 0;
        },
      );
    if (half > 0 && side === 0) {
      on(
        (s) => Math.max(half - ((s[0] ?? 0) - (s[2] ?? 0)), -spring(s, 1)),
        () => {
          side = 1;
        },
      );
      on(
        (s) => Math.max(half + ((s[0] ?? 0) - (s[2] ?? 0)), spring(s, -1)),
        () => {
          side = -1;
        },
      );
    }
    const end = integrate(
      {
        slope: (_t, s) => [
          s[1] ?? 0,
          (gain * oracleForce(plant, u, s[1] ?? 0) - force(s)) / share,
          way === 0 ? 0 : (s[3] ?? 0),
          way === 0 ? 0 : (gain * (net(s) - drag)) / (1 - share),
        ],
        guards,
      },
      y,
      time,
      duration,
      0.05 / coupling.frequency,
    );
    time = end.time;
    y = end.y;
    if (way === 0) y[3] = 0;
    happens[end.guard]?.();
  }
  return { y, side };
}

// Oracle: odex 2.0.4 between events at 1e-13. Where faces meet and part, or the load tears off, a difference grows with every bounce,
// so the bound is on nine mechanisms of ten and a wider one on all.
test('held outputs on 40 random pairs of masses agree with a general ODE solver to 1e-5 of the move', () => {
  const draws = drawsOf(77);
  const misses: number[] = [];
  for (let n = 0; n < 40; n++) {
    const plant = randomCoupled(draws);
    const { response, coupling } = plant;
    const rows = 8;
    const time = new Float64Array(rows);
    const output = new Float64Array(rows);
    for (let row = 0; row < rows; row++) {
      time[row] = row === 0 ? 0 : (time[row - 1] ?? 0) + draws.log(0.01, 0.1);
      output[row] = draws.even(-1, 1);
    }
    const seen = respond(plant, { position: 0, speed: 0 }, time, output);
    const hold = plant.gravity.kind === 'constant' ? response.hold : 0;
    const stretch = ((response.topSpeed / response.lag) * hold) / ((1 - coupling.motorShare) * coupling.frequency ** 2);
    let state = {
      y: [stretch + (Math.sign(hold) * coupling.backlash) / 2, 0, 0, 0],
      side: coupling.backlash > 0 ? Math.sign(hold) : 1,
    };
    const range = Math.max(Math.max(...seen) - Math.min(...seen), 0.01 * response.topSpeed * response.lag);
    let worst = 0;
    for (let row = 1; row < rows; row++) {
      state = oracleCoupled(plant, state, output[row - 1] ?? 0, (time[row] ?? 0) - (time[row - 1] ?? 0));
      worst = Math.max(worst, Math.abs((seen[row] ?? 0) - (state.y[2] ?? 0)) / range);
    }
    misses.push(worst);
  }
  misses.sort((a, b) => a - b);
  expect(misses[35]).toBeLessThan(1e-5);
  expect(misses[39]).toBeLessThan(1e-4);
});
