/** How far the sampled linear loop is from instability; design's model, section 6. Null = never crosses. */
export interface Margins {
  /** Factor by which the loop gain may grow. */
  readonly gain: number | null;
  /** Degrees. */
  readonly phase: number | null;
  /** s of extra dead time. */
  readonly delay: number | null;
  readonly maxSensitivity: number;
  /** Largest magnitude of a closed-loop pole, per tick; ≥ 1 = unstable. */
  readonly spectralRadius: number;
}
