/** What is measured on a trial; definitions in the design's model, section 3. Null = it has no value. Times in s. */
export interface Figures {
  readonly riseTime: number | null;
  /** %. */
  readonly overshoot: number;
  readonly peakTime: number | null;
  readonly settlingTime: number | null;
  /** Profile unit; null while it still moves at the end. */
  readonly restingError: number | null;
  readonly swingRatio: number | null;
  readonly swingPeriod: number | null;
  /** Share of the time to settling with output at its limit, 0 to 1. */
  readonly saturated: number;
  /** Output reversals a second larger than 2 % of full output; null without an output column. */
  readonly chatter: number | null;
  /** ∫|e| dt. */
  readonly iae: number;
  /** ∫t·|e| dt. */
  readonly itae: number;
  /** ∫u² dt with u a fraction of full output; null without an output column. */
  readonly effort: number | null;
}
