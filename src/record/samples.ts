/**
 * The samples of one trial or log, as columns of equal length. Time in s, increasing; setpoint and measured in the
 * profile's unit; output in the controller's output unit. `null` marks a column that the log does not have.
 */
export interface Samples {
  readonly time: Float64Array;
  readonly setpoint: Float64Array;
  readonly measured: Float64Array;
  readonly output: Float64Array | null;
  /** Supply voltage, V. */
  readonly supply: Float64Array | null;
  /** Current, A. */
  readonly current: Float64Array | null;
  /** 1 while the machine is enabled, else 0. */
  readonly enabled: Float64Array | null;
  /** Contributions of the three terms to the output, in the controller's output unit. */
  readonly parts: OutputParts | null;
}

/** What the proportional, integral and derivative terms each added to the output, sample by sample. */
export interface OutputParts {
  readonly p: Float64Array;
  readonly i: Float64Array;
  readonly d: Float64Array;
}

/**
 * The rows from `start` up to and not including `end` of every column, as views on the same memory.
 */
export function sliceSamples(samples: Samples, start: number, end: number): Samples {
  const cut = (column: Float64Array | null): Float64Array | null => column?.subarray(start, end) ?? null;
  const parts = samples.parts;
  return {
    time: samples.time.subarray(start, end),
    setpoint: samples.setpoint.subarray(start, end),
    measured: samples.measured.subarray(start, end),
    output: cut(samples.output),
    supply: cut(samples.supply),
    current: cut(samples.current),
    enabled: cut(samples.enabled),
    parts: parts
      ? { p: parts.p.subarray(start, end), i: parts.i.subarray(start, end), d: parts.d.subarray(start, end) }
      : null,
  };
}
