import type { Profile } from '../mechanism/profile.ts';
import { printable } from '../record/printable.ts';
import { parseProfile, profileText } from './document.ts';
import { ProfileError } from './error.ts';

/**
 * A copy of a profile with one field set from text, checked like a file: `drive.reduction` to `15`, `supply.currentLimit` to `null`.
 * A part that was unknown as a whole (null) cannot be set field by field.
 *
 * @throws {ProfileError} for a field that does not exist or a value that it does not take
 */
export function setField(profile: Profile, path: string, text: string): Profile {
  const parts = path.split('.');
  const copy: unknown = structuredClone(profile);
  let holder: unknown = copy;
  for (const part of parts.slice(0, -1)) holder = inner(holder, part);
  const last = parts.at(-1) ?? '';
  if (typeof holder !== 'object' || holder === null || !Object.hasOwn(holder, last)) {
    throw new ProfileError(
      'field',
      `there is no field ${printable(path)}.`,
      `Fields look like drive.reduction or load.mass. ${suggestion(holder)}`,
      { file: profile.name, field: printable(path) },
    );
  }
  Reflect.set(holder, last, fieldValue(text));
  return parseProfile(profileText(copy as Profile), profile.name);
}

function inner(holder: unknown, part: string): unknown {
  return typeof holder === 'object' && holder !== null && Object.hasOwn(holder, part)
    ? Reflect.get(holder, part)
    : undefined;
}

function suggestion(holder: unknown): string {
  return typeof holder === 'object' && holder !== null ? `Here: ${Object.keys(holder).join(', ')}.` : '';
}

function fieldValue(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return text;
  }
}
