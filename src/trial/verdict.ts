export const VERDICTS = [
  'settled',
  'slow',
  'stuck-short',
  'overshoots',
  'swings',
  'steady-swing',
  'growing-swing',
  'hunting',
  'wound-up',
  'chatters',
  'saturated',
  'late',
  'reversed',
  'deaf',
  'frozen',
  'jumps',
  'wrong-scale',
  'hit-a-stop',
  'sagging',
  'uneven-ticks',
  'one-sided',
  'loose',
  'out-of-band',
  'out-of-reach',
] as const;
export type VerdictName = (typeof VERDICTS)[number];

/** What the figures mean, with the evidence that a person can check. */
export interface Verdict {
  readonly is: VerdictName;
  /** One sentence in the machine's own numbers. */
  readonly because: string;
  /** The rule that fired, in words. */
  readonly rule: string;
  /** The numbers that the rule compared, by name. */
  readonly numbers: Readonly<Record<string, number>>;
  /** First and last sample (inclusive) that show it, or null when the whole record does. */
  readonly samples: readonly [first: number, last: number] | null;
}

/** Verdicts that make tuning pointless until a person has mended something. */
export const HOPELESS: readonly VerdictName[] = [
  'reversed',
  'deaf',
  'frozen',
  'jumps',
  'wrong-scale',
  'hit-a-stop',
  'out-of-reach',
];
