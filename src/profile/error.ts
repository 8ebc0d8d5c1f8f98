/** What can be wrong with a kept file; one a cause. */
export type ProfileFault =
  | 'missing'
  | 'unreadable'
  | 'not-json'
  | 'wrong-format'
  | 'newer-format'
  | 'field'
  | 'name'
  | 'exists'
  | 'busy'
  | 'disk'
  | 'damaged';

/** A kept file that cannot be used or written: what, where, what to do. The file is as it was. */
export class ProfileError extends Error {
  readonly fault: ProfileFault;
  readonly file: string | null;
  readonly line: number | null;
  readonly field: string | null;
  readonly remedy: string;

  constructor(
    fault: ProfileFault,
    what: string,
    remedy: string,
    at: { readonly file?: string | null; readonly line?: number | null; readonly field?: string | null } = {},
  ) {
    super(what);
    this.name = 'ProfileError';
    this.fault = fault;
    this.remedy = remedy;
    this.file = at.file ?? null;
    this.line = at.line ?? null;
    this.field = at.field ?? null;
  }
}
