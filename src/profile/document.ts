import type { Profile } from '../mechanism/profile.ts';
import { printable } from '../record/printable.ts';
import { inconsistencyOf } from './consistency.ts';
import { ProfileError } from './error.ts';
import { profileSchema } from './schema.ts';

const PROFILE_FORMAT = 'holdfast/profile@1';

/** Characters that no honest profile reaches. */
const LONGEST = 1 << 20;

/**
 * Reads a profile document.
 *
 * @param text the file's content
 * @param file its name, for messages
 * @throws {ProfileError} naming field, finding and what was expected; newer formats are refused as such
 */
export function parseProfile(text: string, file: string): Profile {
  const found = parseDocument(text, file, PROFILE_FORMAT);
  const checked = profileSchema.safeParse(found);
  if (!checked.success) throw fieldError(checked.error.issues[0], found, file);
  // Unknown fields of this version pass through, so that a rewrite loses nothing.
  const profile = checked.data as Profile;
  const broken = inconsistencyOf(profile);
  if (broken !== null) {
    throw new ProfileError('field', `${broken.field}: ${broken.what}.`, `Expected: ${broken.expected}.`, {
      file,
      field: broken.field,
    });
  }
  return profile;
}

/**
 * Parses a kept document and checks what it says it is.
 *
 * @throws {ProfileError} for what is not JSON, of another format, or of a newer version of this one
 */
export function parseDocument(text: string, file: string, format: string): Record<string, unknown> {
  if (text.length > LONGEST)
    throw new ProfileError(
      'wrong-format',
      'it is over 1 MB, which no document of Holdfast is.',
      'Check that this is the right file.',
      { file },
    );
  let found: unknown;
  try {
    found = JSON.parse(text.replace(/^\uFEFF/, ''), refuseKeys);
  } catch (error) {
    const message = error instanceof Error ? error.message : '';
    throw new ProfileError(
      'not-json',
      `it is not JSON: ${printable(message)}.`,
      'Mend the file by hand, or restore it from a copy. It is left as it is.',
      { file, line: lineOf(message, text) },
    );
  }
  if (typeof found !== 'object' || found === null || Array.isArray(found)) {
    throw new ProfileError(
      'wrong-format',
      'it is not a JSON object.',
      `A document begins with { "format": "${format}", …`,
      { file },
    );
  }
  const document = found as Record<string, unknown>;
  checkFormat(document['format'], format, file);
  return document;
}

function refuseKeys(this: unknown, key: string, value: unknown): unknown {
  if (key === '__proto__' || key === 'constructor' || key === 'prototype')
    throw new SyntaxError(`the key "${key}" is not allowed`);
  return value;
}

function checkFormat(found: unknown, format: string, file: string): void {
  if (found === format) return;
  const [kind = '', version = ''] = format.split('@');
  const other = typeof found === 'string' ? /^([a-z/-]+)@(\d+)$/.exec(found) : null;
  if (other && other[1] === kind && Number(other[2]) > Number(version)) {
    throw new ProfileError(
      'newer-format',
      `it is written in ${other[0]}, newer than the ${format} of this version.`,
      'Update Holdfast, or use the version that wrote it. The file is left as it is.',
      { file, field: 'format' },
    );
  }
  const shown = found === undefined ? 'no format' : `format ${printable(JSON.stringify(found))}`;
  throw new ProfileError(
    'wrong-format',
    `it has ${shown}; ${format} was expected.`,
    'Check that this is the right file.',
    { file, field: 'format' },
  );
}

function lineOf(message: string, text: string): number | null {
  const line = /line (\d+)/.exec(message);
  if (line) return Number(line[1]);
  const position = /position (\d+)/.exec(message);
  return position ? text.slice(0, Number(position[1])).split('\n').length : null;
}

interface Issue {
  readonly path: readonly PropertyKey[];
  readonly message: string;
}

function fieldError(issue: Issue | undefined, document: unknown, file: string): ProfileError {
  const field = (issue?.path ?? [])
    .map((part, k) => (typeof part === 'number' ? `[${part}]` : `${k > 0 ? '.' : ''}${String(part)}`))
    .join('');
  let value: unknown = document;
  for (const part of issue?.path ?? [])
    value = typeof value === 'object' && value !== null ? Reflect.get(value, part) : undefined;
  const shown = value === undefined ? 'is missing' : `is ${printable(JSON.stringify(value))}`;
  return new ProfileError(
    'field',
    `${field} ${shown}.`,
    `Expected: ${EXPECTED[field.replace(/\[\d+\]/g, '')] ?? issue?.message ?? 'another value'}.`,
    { file, field },
  );
}

/** What a field takes, in words a person can act on. */
const EXPECTED: Readonly<Record<string, string>> = {
  name: '1 to 40 of a-z, 0-9 and -, the same as the file name',
  kind: 'travel, turn, lift, arm or spin',
  quantity: 'position or speed',
  unit: 'm, cm, mm, in, ft, rad, deg or rev; per second for a speed, or rpm',
  continuous: 'the wrap width in the unit (360 for a heading in deg), or null',
  'motor.nominalVoltage': 'V of the data sheet, above 0, such as 12',
  'motor.freeSpeed': 'rpm of the data sheet, above 0, such as 5600',
  'motor.freeCurrent': 'A of the data sheet, 0 or more',
  'motor.stallTorque': 'N·m of the data sheet, above 0',
  'motor.stallCurrent': 'A of the data sheet, above 0',
  'motor.count': 'a whole number of motors, 1 or more',
  'drive.reduction': 'motor turns for one turn of the output, above 0, such as 12',
  'drive.radius': 'm of the wheel or drum, above 0, or null for joints',
  'drive.efficiency': 'above 0, up to 1, such as 0.85',
  'load.mass': 'kg, above 0, or null when unknown',
  'load.inertia': 'kg·m² about the joint, above 0, or null when unknown',
  'load.centreOfMass': 'm from the joint, 0 or more, or null',
  'friction.drag': 'a fraction of full output, 0 to 1, or null when unknown',
  'friction.breakaway': 'a fraction of full output, 0 to 1, or null when unknown',
  'supply.openCircuit': 'V with nothing drawing, above 0, such as 12.7',
  'supply.resistance': 'Ω, 0 or more, such as 0.018',
  'supply.currentLimit': 'A per motor, above 0, or null for none',
  'sensor.resolution': 'smallest step of a reading, in the unit, 0 or more',
  'limits.outputCap': 'a fraction of full output, above 0, up to 1',
  'controller.period': 's between ticks, above 0, such as 0.02',
  'controller.output.unit': 'fraction, percent or volts',
  'controller.timeBase': 'seconds or ticks',
  'controller.form': 'parallel, standard or series',
  'target.tolerance': 'half-width of the band, in the unit, above 0',
  'target.overshoot': '%, 0 to 100',
  'target.settlingTime': 's, above 0',
  'target.moves': 'a list of [from, to] in the unit',
  hazards: 'any of drives, falls, pinch, spins, stored-energy, overhead',
};

/** Keys in the order of the contract; unknown ones after them, as they stood. */
const ORDER = [
  'format',
  'name',
  'title',
  'kind',
  'quantity',
  'unit',
  'continuous',
  'motor',
  'drive',
  'load',
  'friction',
  'supply',
  'sensor',
  'limits',
  'controller',
  'target',
  'gains',
  'hazards',
  'notes',
];

/** A profile as text: keys in one order, one value a line, a newline at the end. */
export function profileText(profile: Profile): string {
  const entries = Object.entries(profile);
  const rank = (key: string) => (ORDER.includes(key) ? ORDER.indexOf(key) : ORDER.length);
  const ordered = entries
    .map(([key, value], k) => ({ key, value, k }))
    .sort((a, b) => rank(a.key) - rank(b.key) || a.k - b.k);
  return documentText(Object.fromEntries(ordered.map(({ key, value }) => [key, value])));
}

/** A kept document as text, one value a line. */
export function documentText(document: unknown): string {
  return `${JSON.stringify(document, null, 2)}\n`;
}
