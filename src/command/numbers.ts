import { InvalidArgumentError } from 'commander';

/** A finite decimal number from the command line. */
export function decimal(text: string): number {
  const value = text.trim() === '' ? Number.NaN : Number(text);
  if (!Number.isFinite(value)) throw new InvalidArgumentError('Give a number, with a point: 0.25');
  return value;
}

/** A decimal number above zero. */
export function positive(text: string): number {
  const value = decimal(text);
  if (value <= 0) throw new InvalidArgumentError('Give a number above zero.');
  return value;
}

/** A whole number of zero or more, as seeds and counts are. */
export function wholeNumber(text: string): number {
  const value = decimal(text);
  if (!Number.isSafeInteger(value) || value < 0) throw new InvalidArgumentError('Give a whole number, zero or more.');
  return value;
}
