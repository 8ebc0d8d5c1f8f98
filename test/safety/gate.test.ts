import { describe, expect, test } from 'vitest';
import { HAZARDS } from '../../src/mechanism/profile.ts';
import { firstCap, nextCap } from '../../src/safety/cap.ts';
import { type GateRequest, openGate } from '../../src/safety/gate.ts';
import type { GateRefusal } from '../../src/safety/hazard.ts';
import { hazardFiguresOf } from '../../src/safety/hazards.ts';
import { checklistOf } from '../../src/safety/items.ts';
import { made, planned, response } from './made.ts';

const MINUTE = 60_000;
const NOW = 1_700_000_000_000;

/** A trial for which everything is in order. */
function inOrder(parts: Partial<GateRequest> = {}): GateRequest {
  const profile = parts.profile ?? made({ hazards: [...HAZARDS] });
  const trial = planned();
  const { items } = checklistOf(profile, hazardFiguresOf(profile, [response()], trial), trial);
  return {
    profile,
    profileDigest: 'abc',
    trial: 3,
    outputCap: 0.4,
    stage: 'proportional',
    directionChecked: true,
    outside: 0,
    growing: 0,
    items,
    signature: {
      name: 'Sam',
      ticked: items.map(({ id }) => id),
      at: NOW - 5 * MINUTE,
      outputCap: 0.4,
      profileDigest: 'abc',
    },
    now: NOW,
    ...parts,
  };
}

function refusals(parts: Partial<GateRequest>): readonly GateRefusal['rule'][] {
  const opening = openGate(inOrder(parts));
  return opening.open ? [] : opening.reasons.map(({ rule }) => rule);
}

function signed(parts: Partial<NonNullable<GateRequest['signature']>>): Pick<GateRequest, 'signature'> {
  const { signature } = inOrder();
  if (signature === null) throw new Error('it is signed');
  return { signature: { ...signature, ...parts } };
}

test('with everything in order it opens, and the permit carries the trial and who signed for it', () => {
  const opening = openGate(inOrder());
  expect(opening.open && opening.permit.trial).toBe(3);
  expect(opening.open && opening.permit.signature.name).toBe('Sam');
});

describe('each rule refuses on its own', () => {
  const nobounds = { min: null, max: 4, outputCap: 1 };
  test.each<readonly [string, Partial<GateRequest>, GateRefusal['rule']]>([
    ['a travel limit is missing', { profile: made({ limits: nobounds, hazards: [...HAZARDS] }) }, 'limits'],
    ['no hazard is filled in', { profile: made({ hazards: [] }) }, 'hazards'],
    ['the direction was not checked', { directionChecked: false }, 'direction'],
    ['2 in 64 rehearsals leave the limits', { outside: 2 / 64 }, 'travel'],
    ['1 in 64 does: that is more than one in a hundred', { outside: 1 / 64 }, 'travel'],
    ['a share is no number', { outside: Number.NaN }, 'travel'],
    ['nothing was rehearsed', { outside: null, growing: null }, 'travel'],
    ['2 in 64 rehearsals swing wider', { growing: 2 / 64 }, 'swing'],
    ['nobody ticked', { signature: null }, 'ticks'],
    [
      'one item is not ticked',
      signed({
        ticked: inOrder()
          .items.slice(1)
          .map(({ id }) => id),
      }),
      'ticks',
    ],
    ['no item is asked', { items: [] }, 'ticks'],
    [
      'the items of a hazard are left out',
      { items: inOrder().items.filter(({ hazard }) => hazard !== 'falls') },
      'ticks',
    ],
    ['nobody is named', signed({ name: '  ' }), 'name'],
    ['the ticks are 15 minutes and a second old', signed({ at: NOW - 15 * MINUTE - 1000 }), 'lapsed'],
    ['the ticks are from later than now', signed({ at: NOW + 1000 }), 'lapsed'],
    ['the ticks have no time', signed({ at: Number.NaN }), 'lapsed'],
    ['the cap is higher than the one signed for', { outputCap: 0.45 }, 'cap'],
    ['the cap is no number', { outputCap: Number.NaN }, 'cap'],
    ['the profile has changed since', { profileDigest: 'abd' }, 'changed'],
  ])('when %s', (_, parts, rule) => {
    expect(refusals(parts)).toEqual([rule]);
  });

  test('every refusal says what is wrong and what to do', () => {
    const opening = openGate(
      inOrder({ profile: made({ hazards: [] }), directionChecked: false, signature: null, outside: 1 }),
    );
    if (opening.open) throw new Error('it must refuse');
    expect(opening.reasons.map(({ rule }) => rule)).toEqual(['hazards', 'direction', 'travel', 'ticks']);
    for (const { what, remedy } of opening.reasons) expect(`${what} ${remedy}`).toMatch(/\.$/);
  });
});

describe('what it lets through', () => {
  test('ticks of exactly 15 minutes, and a trial with a lower cap', () => {
    expect(refusals(signed({ at: NOW - 15 * MINUTE }))).toEqual([]);
    expect(refusals({ outputCap: 0.3 })).toEqual([]);
  });

  test('the direction check itself, before any and on an unknown machine', () => {
    expect(refusals({ stage: 'ready', directionChecked: false, outside: null, growing: null })).toEqual([]);
  });

  test('a speed loop and a heading that wraps, which have no travel limits', () => {
    const limits = { min: null, max: null, outputCap: 1 };
    const wheel = made({ kind: 'spin', quantity: 'speed', unit: 'rpm', limits, hazards: ['spins'] });
    expect(refusals({ profile: wheel })).toEqual([]);
    const heading = made({ kind: 'turn', unit: 'deg', continuous: 360, limits, hazards: ['pinch'] });
    expect(refusals({ profile: heading })).toEqual([]);
  });
});

describe('output caps', () => {
  test('the first is small, never above 40 % without a weight to hold', () => {
    expect(firstCap(made(), response())).toBeCloseTo(0.2, 9);
    expect(firstCap(made(), response({ breakaway: 0.3 }))).toBeCloseTo(0.4, 9);
    expect(firstCap(made({ limits: { min: 0, max: 1, outputCap: 0.15 } }), response())).toBeCloseTo(0.15, 9);
  });

  test('what must hold itself up gets its hold and a quarter at most', () => {
    const lift = made({ kind: 'lift' });
    expect(firstCap(lift, response({ hold: 0.3, breakaway: 0.3 }))).toBeCloseTo(0.55, 9);
    expect(firstCap(lift, response({ hold: 0.05, breakaway: 0.3 }))).toBeCloseTo(0.4, 9);
  });

  test('it rises only after a trial that stayed in its band', () => {
    expect(nextCap(made(), 0.4, true)).toBe(1);
    expect(nextCap(made(), 0.4, false)).toBe(0.4);
    expect(nextCap(made(), 0.4, null)).toBe(0.4);
  });
});
