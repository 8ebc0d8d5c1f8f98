/** One line of a chart: columns of equal length. A NaN value is a gap. */
export interface Line {
  readonly name: string;
  readonly time: Float64Array;
  readonly value: Float64Array;
  /** Two `band` lines in a row, low then high, shade what lies between them. */
  readonly role: 'setpoint' | 'measured' | 'promise' | 'band' | 'tolerance' | 'output' | 'p' | 'i' | 'd' | 'other';
}

export interface ChartSpec {
  readonly title: string;
  /** Unit of the vertical axis as it is shown, e.g. "m". */
  readonly unit: string;
  readonly lines: readonly Line[];
  /** Columns and rows of the whole drawing, axes and legend included. */
  readonly width: number;
  readonly height: number;
  /** Vertical range that must be shown; null = fit. */
  readonly range: readonly [low: number, high: number] | null;
  /** Time shown, s; null = all. */
  readonly span: readonly [start: number, end: number] | null;
  /** Time at which every line is marked and read out, s; absent or null = no cursor. */
  readonly cursor?: number | null | undefined;
}

/** How the terminal can draw. */
export interface Style {
  readonly colour: boolean;
  /** False = plain ASCII only. */
  readonly unicode: boolean;
}
