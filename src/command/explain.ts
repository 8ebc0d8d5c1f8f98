import { LogError } from '../log/error.ts';
import { ProfileError } from '../profile/error.ts';
import { EXIT } from './edge.ts';
import { Failure, unusable } from './failure.ts';
import { UnclosedQuote } from './words.ts';

/** Whatever was thrown, as a failure that can be told: each room's own errors by name, anything else as a defect. */
export function explain(error: unknown): Failure {
  if (error instanceof Failure) return error;
  if (error instanceof LogError || error instanceof ProfileError) {
    const { file, line, field } = error;
    return unusable(error.message, error.remedy, { file, line, field });
  }
  if (error instanceof UnclosedQuote) {
    return new Failure(
      EXIT.wrongUse,
      error.message,
      'Close it, or put a backslash before it if it is meant as it stands.',
    );
  }
  const message = error instanceof Error ? error.message : String(error);
  return new Failure(
    EXIT.defect,
    `This is a defect in Holdfast: ${message}`,
    'Nothing that was kept is lost. Set HOLDFAST_DEBUG=1 to see where it happened, and report it with the command line.',
  );
}
