import type { Hazard } from '../mechanism/profile.ts';

/**
 * What this trial could do, computed over the learnt uncertainty. Null = not known: the texts then say to assume the
 * worst. Lengths and speeds are in the profile's unit unless named otherwise.
 */
export interface HazardFigures {
  /** Farthest travel beyond the start towards larger readings, coasting after a late disable included. */
  readonly travelForward: number | null;
  readonly travelBack: number | null;
  readonly topSpeed: number | null;
  /** J. */
  readonly energy: number | null;
  /** True when the rotors' share of it is not known, so that there is more of it than this. */
  readonly energyIsLeast?: boolean | undefined;
  /** Distance after disable with the motor open (a speed loop: s); the fall of what falls is in it. */
  readonly coast: number | null;
  /** The same with the motor shorted. */
  readonly coastShorted: number | null;
  /** m it can fall, J it gathers, s it takes; null when it cannot fall or is not known. */
  readonly drop: { readonly height: number; readonly energy: number; readonly time: number } | null;
  /** m/s at the rim, when it spins. */
  readonly rimSpeed: number | null;
}

export interface ChecklistItem {
  readonly id: string;
  readonly text: string;
  /** The hazard that asks for it; null = always asked. */
  readonly hazard: Hazard | null;
}

export interface Checklist {
  readonly profile: string;
  readonly figures: HazardFigures;
  readonly items: readonly ChecklistItem[];
  readonly abort: readonly string[];
  readonly after: readonly string[];
  readonly cautions: readonly string[];
}

/** Who ticked what, when (ms since the epoch, given by the edge). Kept with the trial. */
export interface Signature {
  readonly name: string;
  readonly ticked: readonly string[];
  readonly at: number;
  /** Output cap it was given for, fraction of full output. */
  readonly outputCap: number;
  /** Digest of the profile it was given for. */
  readonly profileDigest: string;
}

export interface GateRefusal {
  readonly rule:
    | 'limits'
    | 'hazards'
    | 'direction'
    | 'travel'
    | 'swing'
    | 'ticks'
    | 'name'
    | 'lapsed'
    | 'cap'
    | 'changed';
  readonly what: string;
  readonly remedy: string;
}
