import { readdirSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { plantModelOf } from '../../src/mechanism/plant-of.ts';
import { parseProfile, profileText } from '../../src/profile/document.ts';
import { ProfileError } from '../../src/profile/error.ts';
import { setField } from '../../src/profile/fields.ts';
import { starter } from '../fixtures/starters.ts';

const folder = fileURLToPath(new URL('../../profiles/', import.meta.url));
const names = readdirSync(folder).map((file) => file.replace(/\.json$/, ''));

const failure = (run: () => unknown): ProfileError => {
  try {
    run();
  } catch (error) {
    if (error instanceof ProfileError) return error;
    throw error;
  }
  throw new Error('nothing was refused');
};

describe('the starters', () => {
  test('are at least six, of all five kinds, each marked as invented, with no gains', () => {
    expect(names.length).toBeGreaterThanOrEqual(6);
    expect(new Set(names.map((name) => starter(name).kind)).size).toBe(5);
    for (const name of names) {
      expect(starter(name).notes).toMatch(/invented/i);
      expect(starter(name).gains).toMatchObject({ kp: 0, ki: 0, kd: 0 });
    }
  });

  test.each(names)('%s is kept to the byte by reading and writing it', (name) => {
    expect(profileText(starter(name))).toBe(readFileSync(`${folder}${name}.json`, 'utf8'));
  });

  test.each(names.filter((name) => starter(name).motor !== null))('%s is a believable machine', (name) => {
    const plant = plantModelOf(starter(name));
    expect(plant?.response.lag).toBeGreaterThan(0.01);
    expect(plant?.response.lag).toBeLessThan(0.6);
    expect(plant?.response.hold).toBeLessThan(0.3);
    const [from, to] = starter(name).target.moves[0] ?? [0, 0];
    // Full speed would cover the move within its settling time.
    const reach =
      starter(name).quantity === 'speed' ? Math.abs(to) : Math.abs(to - from) / starter(name).target.settlingTime;
    expect(plant?.response.topSpeed).toBeGreaterThan(reach);
  });
});

describe('a profile document', () => {
  const lift = starter('lift');
  const text = profileText(lift);
  const changed = (change: (document: Record<string, unknown>) => void): string => {
    const document: Record<string, unknown> = JSON.parse(text);
    change(document);
    return JSON.stringify(document);
  };

  test('comes back as it went, whatever its numbers', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-9, max: 1e6, noNaN: true }),
        fc.double({ min: 0, max: 1e9, noNaN: true }),
        (tolerance, kp) => {
          const profile = { ...lift, target: { ...lift.target, tolerance, moves: [] }, gains: { ...lift.gains, kp } };
          expect(parseProfile(profileText(profile), 'lift.json')).toEqual(profile);
        },
      ),
    );
  });

  test('keeps fields that this version does not know', () => {
    const read = parseProfile(
      changed((document) => Object.assign(document, { colour: 'red' })),
      'lift.json',
    );
    expect(JSON.parse(profileText(read))).toMatchObject({ colour: 'red' });
  });

  test.each<readonly [string, string, string, RegExp]>([
    [
      'a newer format',
      changed((document) => Object.assign(document, { format: 'holdfast/profile@2' })),
      'newer-format',
      /newer/,
    ],
    [
      'another format',
      changed((document) => Object.assign(document, { format: 'something/else@1' })),
      'wrong-format',
      /format/,
    ],
    ['no format', changed((document) => Reflect.deleteProperty(document, 'format')), 'wrong-format', /no format/],
    ['half a file', text.slice(0, 200), 'not-json', /JSON/],
    ['an empty file', '', 'not-json', /JSON/],
    ['a list', '[]', 'wrong-format', /object/],
    ['a poisoned key', text.replace('"title"', '"__proto__": {"x": 1}, "title"'), 'not-json', /__proto__/],
    [
      'a negative mass',
      changed((document) =>
        Object.assign(document, { load: { mass: -3, inertia: null, centreOfMass: null, levelAngle: null } }),
      ),
      'field',
      /load\.mass is -3/,
    ],
    [
      'a unit of another quantity',
      changed((document) => Object.assign(document, { unit: 'm/s' })),
      'field',
      /does not measure a position/,
    ],
    [
      'a lift that wraps',
      changed((document) => Object.assign(document, { continuous: 360 })),
      'field',
      /does not wrap/,
    ],
    [
      'a move outside the limits',
      changed((document) => Object.assign(document, { target: { ...lift.target, moves: [[0.2, 9]] } })),
      'field',
      /outside the travel limits/,
    ],
    [
      'limits the wrong way round',
      changed((document) => Object.assign(document, { limits: { min: 2, max: 1, outputCap: 1 } })),
      'field',
      /not below/,
    ],
    ['a name with a path in it', changed((document) => Object.assign(document, { name: '../lift' })), 'field', /name/],
    ['an unknown hazard', changed((document) => Object.assign(document, { hazards: ['dragons'] })), 'field', /hazards/],
    ['NaN for a number', text.replace('"tolerance": 0.003', '"tolerance": NaN'), 'not-json', /JSON/],
  ])('with %s is refused', (_, document, fault, words) => {
    const error = failure(() => parseProfile(document, 'lift.json'));
    expect(error.fault).toBe(fault);
    expect(error.message).toMatch(words);
    expect(error.remedy).not.toBe('');
    expect(error.file).toBe('lift.json');
  });

  test('tells what a field takes', () => {
    const error = failure(() => setField(lift, 'drive.reduction', '0'));
    expect(error.message).toBe('drive.reduction is 0.');
    expect(error.remedy).toMatch(/motor turns for one turn of the output/);
  });

  test('takes one field from text, with the checks of a file', () => {
    expect(setField(lift, 'drive.reduction', '15').drive?.reduction).toBe(15);
    expect(setField(lift, 'supply.currentLimit', 'null').supply?.currentLimit).toBeNull();
    expect(setField(lift, 'controller.output.unit', 'volts').controller.output.unit).toBe('volts');
    expect(failure(() => setField(lift, 'drive.ratio', '3')).message).toMatch(/no field drive\.ratio/);
    expect(failure(() => setField(lift, 'load.mass', 'heavy')).message).toMatch(/load\.mass is "heavy"/);
    expect(failure(() => setField(lift, '__proto__.x', '1')).message).toMatch(/no field/);
  });
});
