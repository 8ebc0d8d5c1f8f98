import type { Controller } from '../controller/tick.ts';

/** A controller's terms while a swift trial runs, in output units: what a tick adds to them, and what they are. */
export interface SwiftRun {
  target: number;
  zone: number;
  /** Integral part for each unit of error. */
  kiTick: number;
  /** Largest |integral part|; NaN = no limit, to which no comparison holds. */
  mostI: number;
  /** Share of the integral part that is kept outside the zone: 1 or 0. */
  iOutside: number;
  /** Derivative part for each unit of change since the last tick … */
  kdTick: number;
  /** … and what the filter keeps of the part before. */
  dKeep: number;
  /** 1 when the derivative is on the reading, 0 when it is on the error. */
  readingShare: number;
  /** Integral and derivative part. */
  i: number;
  d: number;
  /** Error, or reading with its sign turned, at the last tick. */
  previous: number;
}

/** A run to be started. NaN, not 0: an engine that first sees a whole number in a field plans for whole numbers there. */
export function newRun(): SwiftRun {
  const none = Number.NaN;
  return {
    target: none,
    zone: none,
    kiTick: none,
    mostI: none,
    iOutside: none,
    kdTick: none,
    dKeep: none,
    readingShare: none,
    i: none,
    d: none,
    previous: none,
  };
}

/** Puts a run before its first tick. */
export function startRun(run: SwiftRun, controller: Controller, target: number, period: number): void {
  const { ki, kd, mostSum, filter, zone } = controller;
  run.target = target;
  run.zone = zone;
  run.kiTick = ki * period;
  run.mostI = Math.abs(ki) * mostSum;
  run.iOutside = controller.resetsOutside ? 0 : 1;
  run.kdTick = filter > 0 ? kd / (filter + period) : kd / period;
  run.dKeep = filter > 0 ? filter / (filter + period) : 0;
  run.readingShare = controller.onMeasured ? 1 : 0;
  run.i = 0;
  run.d = 0;
  run.previous = 0;
}
