import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import type { ChecklistItem, GateRefusal, Signature } from './hazard.ts';
import { unaskedItems } from './items.ts';

/** Ticks lapse after this, ms; design's safety, Gate. */
const LAPSE = 15 * 60 * 1000;

declare const sealed: unique symbol;

/**
 * Leave to run one powered trial. Only {@link openGate} makes it, and whatever powers a machine asks for it: there is no
 * other way to a powered trial.
 */
export interface Permit {
  readonly [sealed]: true;
  readonly trial: number;
  readonly signature: Signature;
}

/** All that the gate looks at. */
export interface GateRequest {
  readonly profile: Profile;
  /** Digest of the profile as it is now. */
  readonly profileDigest: string;
  /** Number of the trial that is to be run. */
  readonly trial: number;
  /** Fraction of full output that it may use. */
  readonly outputCap: number;
  /** Is this trial itself the direction check? Then none is asked for before it. */
  readonly stage: 'ready' | 'proportional' | 'integral' | 'derivative' | 'proof';
  /** Was a direction check passed since the last mechanical change? */
  readonly directionChecked: boolean;
  /**
   * Share of draws that leave the travel limits, and that swing wider and wider, in rehearsal; null = there was nothing to
   * rehearse on, which only the direction check may be run without.
   */
  readonly outside: number | null;
  readonly growing: number | null;
  readonly items: readonly ChecklistItem[];
  readonly signature: Signature | null;
  /** ms since the epoch. */
  readonly now: number;
}

export type GateOpening =
  | { readonly open: true; readonly permit: Permit }
  | { readonly open: false; readonly reasons: readonly GateRefusal[] };

/** Most draws that may leave the limits or swing wider. */
const MOST_UNSAFE = 0.01;

/** Asks whether a powered trial may be run; every rule that refuses is named. */
export function openGate(request: GateRequest): GateOpening {
  const reasons = [
    ...profileRules(request),
    ...directionRule(request),
    ...rehearsalRules(request),
    ...signatureRules(request),
  ];
  if (reasons.length > 0 || request.signature === null) return { open: false, reasons };
  const permit = { trial: request.trial, signature: request.signature } as Permit;
  return { open: true, permit };
}

function profileRules({ profile }: GateRequest): readonly GateRefusal[] {
  const refusals: GateRefusal[] = [];
  const bounded = profile.quantity === 'speed' || profile.continuous !== null;
  if (!bounded && (profile.limits.min === null || profile.limits.max === null)) {
    refusals.push({
      rule: 'limits',
      what: 'The travel limits are not filled in.',
      remedy: 'Measure how far it may travel each way and enter limits.min and limits.max.',
    });
  }
  if (profile.hazards.length === 0) {
    refusals.push({
      rule: 'hazards',
      what: 'No hazards are filled in.',
      remedy:
        'Say what it can do: drives, falls, pinch, spins, stored-energy, overhead. A machine that moves has at least one.',
    });
  }
  return refusals;
}

function directionRule({ stage, directionChecked }: GateRequest): readonly GateRefusal[] {
  if (directionChecked || stage === 'ready') return [];
  return [
    {
      rule: 'direction',
      what: 'The direction was not checked since the last mechanical change.',
      remedy: 'Run the direction check first: a small output, and see that it moves and counts the expected way.',
    },
  ];
}

function rehearsalRules({ outside, growing, stage }: GateRequest): readonly GateRefusal[] {
  const percent = (share: number) => `${formatNumber(100 * share, 2)} of 100`;
  if (outside === null || growing === null) {
    if (stage === 'ready') return [];
    return [
      {
        rule: 'travel',
        what: 'Nothing is known of the machine, so that the trial could not be rehearsed.',
        remedy: 'Run the direction check first, or fill in motor, drive and load.',
      },
    ];
  }
  const refusals: GateRefusal[] = [];
  // Asked this way round, a share that is no number refuses.
  if (!(outside <= MOST_UNSAFE))
    refusals.push({
      rule: 'travel',
      what: `${percent(outside)} rehearsals leave the travel limits.`,
      remedy: 'Lower the gains or the output cap, or give the move more room.',
    });
  if (!(growing <= MOST_UNSAFE))
    refusals.push({
      rule: 'swing',
      what: `${percent(growing)} rehearsals swing wider and wider.`,
      remedy: 'Lower the gains.',
    });
  return refusals;
}

function signatureRules(request: GateRequest): readonly GateRefusal[] {
  const { signature, items, now } = request;
  if (signature === null)
    return [
      {
        rule: 'ticks',
        what: 'The checklist of this trial is not ticked.',
        remedy: 'Go through it item by item and sign it.',
      },
    ];
  const refusals: GateRefusal[] = [];
  const unasked = unaskedItems(request.profile, items);
  if (unasked.length > 0)
    refusals.push({
      rule: 'ticks',
      what: `The checklist is not whole: ${unasked.join(', ')} not asked.`,
      remedy: 'Take the checklist of this trial as it is made.',
    });
  const missing = items.filter((item) => !signature.ticked.includes(item.id));
  if (missing.length > 0)
    refusals.push({
      rule: 'ticks',
      what: `Not ticked: ${missing.map((item) => item.text).join(' · ')}`,
      remedy: 'Do what they say, then tick them.',
    });
  if (signature.name.trim() === '')
    refusals.push({ rule: 'name', what: 'Nobody has signed.', remedy: 'The person who ticked enters a name.' });
  if (!(now - signature.at <= LAPSE && now >= signature.at))
    refusals.push({
      rule: 'lapsed',
      what: 'The ticks are more than 15 minutes old.',
      remedy: 'Go through the checklist again.',
    });
  if (!(request.outputCap <= signature.outputCap + 1e-9))
    refusals.push({
      rule: 'cap',
      what: 'The output cap is higher than the one signed for.',
      remedy: 'Go through the checklist again for the higher cap.',
    });
  if (request.profileDigest !== signature.profileDigest)
    refusals.push({
      rule: 'changed',
      what: 'The profile has changed since the ticks.',
      remedy: 'Go through the checklist again.',
    });
  return refusals;
}
