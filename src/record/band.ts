/** Where a response will lie, nine times in ten: columns of equal length, time in s, the rest in the profile's unit. */
export interface Band {
  readonly time: Float64Array;
  readonly low: Float64Array;
  readonly middle: Float64Array;
  readonly high: Float64Array;
}

/** A quantity with its 95 % interval. */
export interface Interval {
  readonly best: number;
  readonly low: number;
  readonly high: number;
}
