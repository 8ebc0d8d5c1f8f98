import { mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { marginsOf } from '../../src/margin/of-response.ts';
import { responseOf } from '../../src/mechanism/plant-of.ts';
import { parseProfile } from '../../src/profile/document.ts';
import { holdfast, holdfastJson, snapshotOf, temporaryFolder } from './harness.ts';
import { CANONICAL, csv, put, secondOrderRows } from './logs.ts';
import { checklistResult, errorResult, fitResult, predictResult, tuneResult } from './shapes.ts';

const cwd = temporaryFolder();
const here = ['--profiles', cwd];

describe('demo', () => {
  test('writes nothing, tells the same story for the same seed, and another for another', async () => {
    const folder = temporaryFolder();
    const words = ['demo', 'drivetrain', '--profiles', join(folder, 'none'), '--seed', '3'];
    const [a, b, c] = [
      await holdfast(words, { cwd: folder }),
      await holdfast(words, { cwd: folder }),
      await holdfast([...words.slice(0, -1), '4'], { cwd: folder }),
    ];
    expect(a.code).toBe(0);
    expect(a.out).toBe(b.out);
    expect(a.out).not.toBe(c.out);
    expect(a.out).toContain('Invented and simulated: nothing moves, and nothing is written.');
    expect(a.out).toContain('promised, 9 times in 10');
    expect(a.out).toContain('What the trials found out');
    expect(readdirSync(folder)).toEqual([]);
  });

  test('as JSON it is a tune result without logs', async () => {
    const { document } = await holdfastJson(['demo', ...here], { cwd });
    const result = tuneResult.parse(document);
    expect(result.met).toBe(true);
    expect(result.trials.every(({ log }) => log === null)).toBe(true);
  });
});

describe('fit', () => {
  test('finds the lag and top speed of a first-order speed loop in closed form', async () => {
    // v = K·u·(1 − e^(−t/τ)) under a constant output of 0.5, K = 100 a unit of output, τ = 0.2 s: closed form.
    const rows = Array.from({ length: 151 }, (_, k) => [k / 50, 50 * (1 - Math.exp(-k / 50 / 0.2)), 0.5]);
    put(cwd, 'spin.csv', csv('time,speed [rad/s],output', rows));
    const { code, document } = await holdfastJson(['fit', 'spin.csv'], { cwd });
    const result = fitResult.parse(document);
    expect(code).toBe(0);
    expect(result).toMatchObject({ quantity: 'speed', unit: 'rad/s', usable: true, logs: ['spin.csv'] });
    expect(result.fit).toBeGreaterThan(99);
    expect(result.model.lag[0]).toBeCloseTo(0.2, 1);
    // Drag and top speed are told apart only through the prior here; what both give together is certain.
    const [topSpeed] = result.model.topSpeed;
    expect(topSpeed * (0.5 - result.model.drag[0])).toBeCloseTo(50, 0);
  });

  test('a log that teaches nothing is an answer of no: 1', async () => {
    put(
      cwd,
      'idle.csv',
      csv(
        CANONICAL,
        secondOrderRows(0.5, 5, 2).map(([t = 0, r = 0, y = 0]) => [t, r, y, 0]),
      ),
    );
    const { code, document } = await holdfastJson(['fit', 'idle.csv'], { cwd });
    expect(code).toBe(1);
    const result = fitResult.parse(document);
    expect(result.usable).toBe(false);
    expect(result.warnings.join()).toContain('output is zero throughout');
  });
});

describe('predict', () => {
  test('gives band, figures and the loop’s margins', async () => {
    const { code, document } = await holdfastJson(['predict', 'drivetrain', '--kp', '1', '--kd', '0.2', ...here], {
      cwd,
    });
    const result = predictResult.parse(document);
    expect(code).toBe(0);
    expect(result.gains).toMatchObject({ kp: 1, kd: 0.2, ki: 0 });
    expect(result.time).toHaveLength(result.band.middle.length);
    result.band.low.forEach((low, k) => {
      expect(low).toBeLessThanOrEqual(result.band.high[k] ?? Number.NEGATIVE_INFINITY);
    });
    const profile = parseProfile(readFileSync(join(import.meta.dirname, '../../profiles/drivetrain.json'), 'utf8'), '');
    const response = responseOf(profile);
    if (response === null) throw new Error('the starter has no machine');
    const gains = { ...profile.gains, kp: 1, kd: 0.2 };
    const own = marginsOf({
      response,
      quantity: 'position',
      gains,
      settings: profile.controller,
      sensorDelay: profile.sensor?.delay ?? 0,
    });
    // The prior adds a part of a tick of dead time to the nameplate, so the margins lie a little under its own.
    expect(result.margins.phase).toBeLessThanOrEqual(own.phase ?? 0);
    expect(result.margins.phase).toBeGreaterThan(0.7 * (own.phase ?? 0));
  });

  test('gains are typed in the profile’s own form, time base and unit', async () => {
    const folder = temporaryFolder();
    const lift = JSON.parse(readFileSync(join(import.meta.dirname, '../../profiles/lift.json'), 'utf8'));
    const controller = { ...lift.controller, form: 'standard', timeBase: 'ticks', period: 0.02 };
    writeFileSync(join(folder, 'own.json'), JSON.stringify({ ...lift, name: 'own', controller }));
    const words = ['predict', 'own', '--kp', '8', '--ti', '50', '--td', '2', '--profiles', folder];
    const { document } = await holdfastJson(words, { cwd: folder });
    // Standard form, times in ticks of 20 ms: Ki = K/Ti = 8/(50·0.02) = 8, Kd = K·Td = 8·2·0.02 = 0.32 (definition of the form).
    const { gains } = predictResult.parse(document);
    expect(gains.kp).toBeCloseTo(8, 12);
    expect(gains.ki).toBeCloseTo(8, 12);
    expect(gains.kd).toBeCloseTo(0.32, 12);
    expect(
      (await holdfast(['predict', 'own', '--kp', '8', '--kd', '2', '--profiles', folder], { cwd: folder })).code,
    ).toBe(2);
  });

  test('without gains or without a machine it says what is missing', async () => {
    expect((await holdfast(['predict', 'lift', ...here], { cwd })).code).toBe(2);
    const { code, document } = await holdfastJson(['predict', 'slide', '--kp', '1', ...here], { cwd });
    expect(code).toBe(3);
    expect(errorResult.parse(document).remedy).toContain('--log');
  });
});

describe('checklist', () => {
  test('holds this trial’s own figures, items by hazard, and what ends it', async () => {
    const { code, document, err } = await holdfastJson(['checklist', 'lift', ...here], { cwd });
    const result = checklistResult.parse(document);
    expect(code).toBe(0);
    expect(err).toContain('is a starter');
    expect(result.items.map(({ hazard }) => hazard)).toEqual(expect.arrayContaining([null, 'falls', 'pinch']));
    // It can fall from the higher end of the move to its lower limit: h metres in √(2h/g), with m·g·h.
    const { drop } = result.figures;
    expect(drop?.time).toBeCloseTo(Math.sqrt((2 * (drop?.height ?? 0)) / 9.80665), 9);
    expect(drop?.energy).toBeCloseTo(9.5 * 9.80665 * (drop?.height ?? 0), 6);
  });

  test('of a machine that is not known, nothing is called small', async () => {
    const { code, out } = await holdfast(['checklist', 'slide', ...here], { cwd });
    expect(code).toBe(0);
    expect(out).toContain('not known: assume the worst');
  });
});

describe('gains', () => {
  test('writes the same gains as another controller would', async () => {
    const words = ['gains', 'lift', '--kp', '8', '--ki', '2', '--kd', '0.1', ...here];
    const { document } = await holdfastJson(
      [...words, '--form', 'standard', '--time-base', 'ticks', '--output', 'percent'],
      { cwd },
    );
    // K = 8·100, Ti = 8/2 s = 200 ticks, Td = 0.1/8 s = 0.625 ticks of 20 ms (definition of the form).
    expect(document).toHaveProperty('entered', {
      K: { value: 800, unit: '%/m' },
      Ti: { value: 200, unit: 'tick' },
      Td: { value: 0.625, unit: 'tick' },
    });
    // The series form needs Ti ≥ 4·Td: 8/2 = 4 s against 4·(3/8) s holds, 8/20 = 0.4 s against 1.5 s does not.
    expect((await holdfast([...words, '--kd', '3', '--form', 'series'], { cwd })).code).toBe(0);
    const refused = await holdfast([...words, '--ki', '20', '--kd', '3', '--form', 'series'], { cwd });
    expect(refused.code).toBe(3);
    expect(refused.err).toContain('Use the parallel or standard form');
  });
});

describe('profiles and new', () => {
  test('a starter is copied under a new name, listed, and never overwritten', async () => {
    const folder = temporaryFolder();
    const at = ['--profiles', folder];
    expect((await holdfast(['profiles', ...at], { cwd: folder })).out).toContain('none yet');
    expect((await holdfast(['new', 'left-lift', '--from', 'lift', ...at], { cwd: folder })).code).toBe(0);
    expect((await holdfast(['profiles', ...at], { cwd: folder })).out).toMatch(
      /left-lift +Two-stage lift +no gains yet/,
    );
    const before = snapshotOf(folder);
    const again = await holdfast(['new', 'left-lift', '--from', 'turret', ...at], { cwd: folder });
    expect(again.code).toBe(3);
    expect(again.err).toContain('already');
    expect((await holdfast(['new', '../left', '--from', 'lift', ...at], { cwd: folder })).code).toBe(3);
    expect(snapshotOf(folder)).toEqual(before);
  });

  test('a file that cannot be read is listed with the reason, and the others still are', async () => {
    const folder = temporaryFolder();
    mkdirSync(folder, { recursive: true });
    writeFileSync(join(folder, 'broken.json'), '{');
    await holdfast(['new', 'arm-2', '--from', 'arm', '--profiles', folder], { cwd: folder });
    const { code, out } = await holdfast(['profiles', '--profiles', folder], { cwd: folder });
    expect(code).toBe(0);
    expect(out).toMatch(/arm-2 +Shoulder arm/);
    expect(out).toMatch(/broken +cannot be read: it is not JSON/);
  });
});
