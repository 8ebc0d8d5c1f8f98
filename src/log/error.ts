/** What can be wrong with a log; one a cause. */
export type LogFault =
  | 'cannot-open'
  | 'empty'
  | 'binary'
  | 'truncated'
  | 'no-rows'
  | 'no-column'
  | 'no-setpoint'
  | 'unknown-column'
  | 'unit'
  | 'not-a-number'
  | 'ragged'
  | 'time-goes-back'
  | 'too-long';

/** A log that cannot be used: what is wrong, where, and what to do. */
export class LogError extends Error {
  readonly fault: LogFault;
  readonly file: string;
  /** 1-based line of the file; null when it is not about one. */
  readonly line: number | null;
  /** Header of the column; null when it is not about one. */
  readonly field: string | null;
  readonly remedy: string;

  constructor(fault: LogFault, what: string, remedy: string, at: { file: string; line?: number; field?: string }) {
    super(what);
    this.name = 'LogError';
    this.fault = fault;
    this.file = at.file;
    this.line = at.line ?? null;
    this.field = at.field ?? null;
    this.remedy = remedy;
  }
}
