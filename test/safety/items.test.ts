import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { NO_GAINS } from '../../src/controller/settings.ts';
import { HAZARDS, type Hazard, type Profile } from '../../src/mechanism/profile.ts';
import { hazardFiguresOf } from '../../src/safety/hazards.ts';
import { checklistOf, NOT_KNOWN, unaskedItems } from '../../src/safety/items.ts';
import { load, made, planned, response } from './made.ts';

const always = ['disable', 'voice', 'area', 'eyes', 'hands', 'battery', 'readback', 'roles', 'ends'];

function checklist(profile: Profile, known: 'known' | 'unknown' = 'known', trial = planned()) {
  return checklistOf(profile, hazardFiguresOf(profile, known === 'known' ? [response()] : null, trial), trial);
}

describe('what is asked', () => {
  test('everything that is always asked, of a mechanism without a hazard, too', () => {
    expect(checklist(made({ hazards: [] })).items.map(({ id }) => id)).toEqual(always);
  });

  test.each<readonly [Hazard, RegExp]>([
    ['drives', /off the floor first.*floor is marked and clear.*far end/s],
    ['falls', /lowest rest before power and before hands.*Nobody is under it/s],
    ['pinch', /hand’s width/],
    ['spins', /guard is on.*nothing is loose.*stands still/s],
    ['stored-energy', /[Ss]prings.*released or pinned before hands.*may still move/s],
    ['overhead', /headroom.*nobody stands under/s],
  ])('%s brings its items', (hazard, words) => {
    const items = checklist(made({ hazards: [hazard] })).items.filter((one) => one.hazard === hazard);
    expect(items.map(({ text }) => text).join('\n')).toMatch(words);
  });

  test('a list that lacks any of it is seen to', () => {
    const profile = made({ hazards: [...HAZARDS] });
    const { items } = checklist(profile);
    expect(unaskedItems(profile, items)).toEqual([]);
    for (const id of always)
      expect(
        unaskedItems(
          profile,
          items.filter((one) => one.id !== id),
        ),
      ).toEqual([id]);
    for (const hazard of HAZARDS)
      expect(
        unaskedItems(
          profile,
          items.filter((one) => one.hazard !== hazard),
        ),
      ).toEqual([hazard]);
  });

  test('it says that it is no safeguard, who comes first, and claims no conformity', () => {
    const words = checklist(made()).cautions.join(' ');
    expect(words).toMatch(/no safeguard/);
    expect(words).toMatch(/event’s rules.*safety lead.*maker.*local law come first/);
    expect(words).toMatch(/conformity with no standard/);
    expect(words).toMatch(/qualified/);
  });
});

describe('this trial’s own figures', () => {
  const text = (id: string, profile: Profile, known: 'known' | 'unknown' = 'known', trial = planned()) =>
    checklist(profile, known, trial).items.find((one) => one.id === id)?.text ?? '';

  test('gains and cap as the robot’s own code writes them', () => {
    // Standard form of kp 2, ki 4, kd 0.1: K 2, Ti = 2/4 s, Td = 0.1/2 s; in percent × 100.
    const controller = {
      ...made().controller,
      form: 'standard' as const,
      output: { unit: 'percent' as const, min: -100, max: 100 },
    };
    const trial = planned({ gains: { ...NO_GAINS, kp: 200, ki: 400, kd: 10, hold: 12 }, outputCap: 0.35 });
    const line = text('readback', made({ controller }), 'known', trial);
    expect(line).toMatch(/K 200, Ti 0\.5, Td 0\.05, hold 12 \(standard form, seconds\); output cap 35 %/);
  });

  test('a form that cannot write them says so', () => {
    const controller = { ...made().controller, form: 'series' as const };
    const trial = planned({ gains: { ...NO_GAINS, kp: 1, ki: 4, kd: 1 } });
    expect(text('readback', made({ controller }), 'known', trial)).toMatch(
      /Kp 1, Ki 4, Kd 1 .*series form.*cannot write/,
    );
  });

  test('energy with the mass known, more than it without the rotors, nothing small without the mass', () => {
    const heavy = made({ load: { ...load, mass: 45 } });
    expect(text('area', heavy)).toMatch(/more than [\d.]+ J, the rotors’ share not known/);
    const motor = {
      nominalVoltage: 12,
      freeSpeed: 5000,
      freeCurrent: 2,
      stallTorque: 2.4,
      stallCurrent: 130,
      count: 1,
    };
    const whole = {
      ...heavy,
      motor: { ...motor, rotorInertia: 1e-5 },
      drive: { reduction: 9, radius: 0.05, efficiency: 1 },
    };
    expect(text('area', whole)).toMatch(/up to [\d.]+ J/);
    expect(text('area', made())).toContain(`an energy that is ${NOT_KNOWN}`);
  });

  test('when nothing is known every item with a figure says to assume the worst, and none has a small number', () => {
    const profile = made({ kind: 'lift', hazards: [...HAZARDS], limits: { min: null, max: null, outputCap: 1 } });
    const { items, abort, after } = checklist(profile, 'unknown');
    for (const id of ['area', 'drives-floor', 'falls-support', 'pinch-guard', 'spins-guard', 'spins-stop'])
      expect(items.find((one) => one.id === id)?.text).toContain(NOT_KNOWN);
    expect(abort.join(' ')).toContain(NOT_KNOWN);
    expect(after.join(' ')).toContain(NOT_KNOWN);
    const measured = items
      .filter(({ id }) => id !== 'readback')
      .map(({ text }) => text.replaceAll(/a hand’s width/g, ''));
    expect(measured.join(' ')).not.toMatch(/\d/);
  });

  test('when to stop: swing, position, output, heat, a voice', () => {
    const { abort } = checklist(made({ target: { tolerance: 0.01, overshoot: 10, settlingTime: 1, moves: [[0, 1]] } }));
    // 1.5 × 10 % of 1 m past 1 m.
    expect(abort[0]).toMatch(/second time past 1\.15 m/);
    expect(abort[1]).toMatch(/past 4 m or below -1 m/);
    expect(abort.join(' ')).toMatch(/limit for longer than 0\.67 s.*hotter or louder.*smells.*says stop/s);
  });
});

// The whole page, read by eye: npx vitest run --project unit test/safety -u && git diff test/golden
test('the words of a lift’s checklist', async () => {
  const lift = made({
    kind: 'lift',
    title: 'Two-stage lift',
    load: { ...load, mass: 9.5 },
    limits: { min: 0, max: 1.4, outputCap: 1 },
    hazards: [...HAZARDS],
    sensor: { resolution: 0.0002, noise: 0, delay: 0 },
  });
  const trial = planned({ gains: { ...NO_GAINS, kp: 6, hold: 0.11 }, move: { from: 0.2, to: 0.6 } });
  const model = response({ topSpeed: 1.9, lag: 0.09, hold: 0.11 });
  const { items, abort, after, cautions } = checklistOf(lift, hazardFiguresOf(lift, [model], trial), trial);
  const page = [...items.map(({ text }) => `[ ] ${text}`), '', ...abort, '', ...after, '', ...cautions];
  await expect(`${page.join('\n')}\n`).toMatchFileSnapshot(
    join(import.meta.dirname, '../golden/report-checklist-words.txt'),
  );
});
