import { EXIT } from './edge.ts';
import { Failure } from './failure.ts';

/** Whatever was thrown, as a failure that can be told: each room's own errors by name, anything else as a defect. */
export function explain(error: unknown): Failure {
  if (error instanceof Failure) return error;
  const message = error instanceof Error ? error.message : String(error);
  return new Failure(
    EXIT.defect,
    `This is a defect in Holdfast: ${message}`,
    'Nothing that was kept is lost. Set HOLDFAST_DEBUG=1 to see where it happened, and report it with the command line.',
  );
}
