import { EXIT, type ExitCode } from './edge.ts';

/** Where a failure sits: all that is known of it. */
export interface Where {
  readonly file: string | null;
  readonly line: number | null;
  readonly field: string | null;
}

const NOWHERE: Where = { file: null, line: null, field: null };

/** `holdfast/error@1`; contracts, section 5. */
export interface ErrorDocument {
  readonly format: 'holdfast/error@1';
  readonly exit: ExitCode;
  readonly what: string;
  readonly where: Where;
  readonly remedy: string;
}

/** Anything that ends a command short of its result, ready to be told: exit code, what, where, what to do. */
export class Failure extends Error {
  readonly exit: ExitCode;
  readonly where: Where;
  readonly remedy: string;

  constructor(exit: ExitCode, what: string, remedy: string, where: Partial<Where> = {}) {
    super(what);
    this.exit = exit;
    this.remedy = remedy;
    this.where = { ...NOWHERE, ...where };
  }
}

/** The person asked for something that this command does not offer. */
export function wrongUse(what: string, remedy: string): Failure {
  return new Failure(EXIT.wrongUse, what, remedy);
}

/** A file or a plant gave something that cannot be used. */
export function unusable(what: string, remedy: string, where: Partial<Where> = {}): Failure {
  return new Failure(EXIT.unusableInput, what, remedy, where);
}

/** Refused because a person could get hurt. */
export function refused(what: string, remedy: string): Failure {
  return new Failure(EXIT.refused, what, remedy);
}

export function errorDocument(failure: Failure): ErrorDocument {
  return {
    format: 'holdfast/error@1',
    exit: failure.exit,
    what: failure.message,
    where: failure.where,
    remedy: failure.remedy,
  };
}

/** The failure as a person reads it: where, what, and on the next line what to do. */
export function errorText(failure: Failure): string {
  const { file, line, field } = failure.where;
  const place = [file, line === null ? null : `line ${line}`, field].filter((part) => part !== null).join(', ');
  const told = failure.message.startsWith(place) || place === '' ? failure.message : `${place}: ${failure.message}`;
  return failure.remedy === '' ? `${told}\n` : `${told}\n${failure.remedy}\n`;
}
