import fc from 'fast-check';
import stringWidth from 'string-width';
import { describe, expect, test } from 'vitest';
import { NO_GAINS } from '../../src/controller/settings.ts';
import { checklistText } from '../../src/report/checklist.ts';
import { figuresTable } from '../../src/report/figures.ts';
import { gainsLine, gainsTable } from '../../src/report/gains.ts';
import { ledgerTable, trialLine } from '../../src/report/ledger.ts';
import { marginsText } from '../../src/report/margins.ts';
import { modelTable } from '../../src/report/model.ts';
import { table, wrapped } from '../../src/report/page.ts';
import { outcomeText, proposalText } from '../../src/report/proposal.ts';
import { REMEDIES, verdictLines } from '../../src/report/verdicts.ts';
import { hazardFiguresOf } from '../../src/safety/hazards.ts';
import { checklistOf, NOT_KNOWN } from '../../src/safety/items.ts';
import { VERDICTS } from '../../src/trial/verdict.ts';
import { ASCII, figures, gains, learnt, lift, NARROW, proposal, reading, record, UNICODE, verdict } from './made.ts';

const checklist = checklistOf(lift, hazardFiguresOf(lift, [learnt.response], proposal), proposal);
const margins = { gain: 4.893, phase: 39.19, delay: 0.1033, maxSensitivity: 1.808, spectralRadius: 0.95 };
const outcome = { met: false, stopped: 'trials used up', gains: NO_GAINS, why: 'The motor is the limit.', margins };

describe('pages', () => {
  const texts = (page: typeof UNICODE | typeof ASCII | typeof NARROW) => [
    proposalText(proposal, 4, lift, page),
    figuresTable(figures, lift, 'target', page),
    verdictLines(reading.verdicts, page),
    ledgerTable([{ record, reading }], lift, page),
    marginsText(margins, page),
    modelTable(learnt, lift, page),
    outcomeText(outcome, 12, lift, page),
    checklistText(checklist, lift, page),
    trialLine({ record, reading }, lift, page),
    gainsTable(gains, lift, page),
  ];

  test('no line is wider than 80 columns, in Unicode and in ASCII', () => {
    for (const page of [UNICODE, ASCII]) {
      for (const line of texts(page).join('\n').split('\n')) expect(stringWidth(line)).toBeLessThanOrEqual(80);
    }
  });

  test('in ASCII every character is plain and every sign of Unicode has a spelling', () => {
    for (const text of texts(ASCII)) {
      expect(text).toMatch(/^[\n\x20-\x7e]*$/);
      expect(text).not.toContain('?');
    }
  });

  test('words are wrapped to any width, nothing is lost, and wide characters count as two', () => {
    fc.assert(
      fc.property(
        fc.array(fc.constantFrom('Kp', 'settles', '昇降機', 'é', 'a'.repeat(30), '🔧'), {
          minLength: 1,
          maxLength: 25,
        }),
        fc.integer({ min: 2, max: 60 }),
        (words, width) => {
          const lines = wrapped(words.join(' '), width);
          for (const line of lines) expect(stringWidth(line)).toBeLessThanOrEqual(width);
          expect(lines.join('').replaceAll(' ', '')).toBe(words.join(''));
        },
      ),
      { numRuns: 200, seed: 3 },
    );
  });

  test('columns line up under characters two columns wide, too', () => {
    const [first = '', second = ''] = table(
      [
        ['昇降', '1'],
        ['lift', '22'],
      ],
      ['left', 'right'],
      NARROW,
    );
    expect(stringWidth(first)).toBe(stringWidth(second));
  });
});

test('in ASCII a dot that multiplies is a star, and one that parts is a semicolon', () => {
  expect(gainsTable(gains, lift, ASCII)).toContain('%/m*s');
  expect(trialLine({ record, reading }, lift, ASCII)).toContain('3 integral ; 0.2 m -> 1 m ; ');
});

describe('figures beside the target', () => {
  const row = (text: string, name: string) => text.split('\n').find((line) => line.startsWith(name)) ?? '';

  test('what is missed is said in words, what is met too', () => {
    const text = figuresTable(figures, lift, 'target', UNICODE);
    expect(row(text, 'overshoot')).toMatch(/7\.3 % +at most 5 % +MISSED$/);
    expect(row(text, 'settling time')).toMatch(/did not settle +at most 1 s +MISSED$/);
    expect(row(text, 'resting error')).toMatch(/4\.2 mm +within 5 mm +met$/);
    expect(row(figuresTable({ ...figures, settlingTime: 0.8 }, lift, 'target', UNICODE), 'settling time')).toMatch(
      /0\.8 s .*met$/,
    );
  });

  test('a swing that grows is shouted; one that dies is not', () => {
    expect(figuresTable({ ...figures, swingRatio: 1.4 }, lift, 'target', UNICODE)).toContain('GROWS: each 140 %');
    expect(figuresTable(figures, lift, 'target', UNICODE)).not.toContain('GROWS');
  });

  test('a resting error is told to the digits that the sensor has', () => {
    const coarse = { ...lift, sensor: { resolution: 0.01, noise: 0, delay: 0 } };
    expect(figuresTable({ ...figures, restingError: 0.04237 }, coarse, 'nothing', UNICODE)).toContain('42 mm');
    expect(figuresTable({ ...figures, restingError: 0.04237 }, lift, 'nothing', UNICODE)).toContain('42.4 mm');
  });
});

describe('what to do', () => {
  test('every verdict has its remedy, a sentence of its own', () => {
    expect(Object.keys(REMEDIES).sort()).toEqual([...VERDICTS].sort());
    expect(new Set(Object.values(REMEDIES)).size).toBe(VERDICTS.length);
    for (const is of VERDICTS) expect(verdictLines([verdict(is, 'Because.')], UNICODE)).toContain(`${is}: Because.`);
  });

  test('a growing swing and a reversed sign begin with disable', () => {
    for (const is of ['growing-swing', 'reversed'] as const) expect(REMEDIES[is]).toMatch(/^Disable\./);
  });
});

describe('gains', () => {
  test('are entered as the controller writes them, with units', () => {
    expect(
      gainsTable(gains, lift, UNICODE)
        .split('\n')
        .map((line) => line.replaceAll(/ +/g, ' ')),
    ).toEqual(['Kp 610 %/m', 'Ki 200 %/m/s', 'Kd 31 %/m·s', 'zone 0.05 m', 'hold 11.4 %']);
    // Per-tick code at 0.02 s: Ki·T and Kd/T (design's checks, Similarity).
    const ticks = { ...lift, controller: { ...lift.controller, timeBase: 'ticks' as const } };
    expect(gainsLine(gains, ticks)).toBe('Kp 610 · Ki 4 · Kd 1550 · zone 0.05 m · hold 11.4 (parallel form, ticks)');
  });

  test('an outcome that proved nothing says to enter none', () => {
    expect(outcomeText(outcome, 12, lift, UNICODE)).toMatch(
      /Target not met: trials used up, after 12 trials.*None were proven/s,
    );
  });
});

test('the model says in words what no log has taught, and what would teach it', () => {
  const text = modelTable(learnt, lift, UNICODE);
  expect(text).toMatch(/breakaway +4\.5 % +not learnt yet/);
  expect(text.replaceAll(/\s+/g, ' ')).toMatch(/The breakaway is not learnt.*It takes a slow start from rest/);
  expect(text).toMatch(/top speed +1\.9 m\/s +1\.84 m\/s to 1\.97 m\/s/);
  expect(modelTable(learnt, { ...lift, kind: 'travel' }, UNICODE)).not.toContain('hold');
});

test('margins of an unstable loop give no figure to trust', () => {
  const text = marginsText({ ...margins, spectralRadius: 1.02 }, UNICODE);
  expect(text).toContain('wider and wider');
  expect(text).not.toMatch(/\d/);
});

describe('the checklist', () => {
  test('has a box for every item, filled when ticked', () => {
    const text = checklistText(checklist, lift, UNICODE, ['disable', 'voice']);
    expect(text.match(/^ {2}\[[ x]\]/gm)).toHaveLength(checklist.items.length);
    expect(text.match(/\[x\]/g)).toHaveLength(2);
  });

  test('of an unknown machine assumes the worst in every row', () => {
    const trial = { gains, move: { from: 0.2, to: 1 }, duration: 2, outputCap: 0.4 };
    const blind = { ...lift, limits: { min: null, max: null, outputCap: 1 } };
    const text = checklistText(checklistOf(blind, hazardFiguresOf(blind, null, trial), trial), blind, UNICODE);
    for (const name of ['can reach', 'fastest', 'energy', 'goes on', 'can drop'])
      expect(text.split('\n').find((line) => line.startsWith(`  ${name}`))).toContain(NOT_KNOWN);
  });
});
