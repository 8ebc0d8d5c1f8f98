import { knownResponses } from '../coach/draws.ts';
import { rehearsalOf } from '../coach/rehearsal.ts';
import { checkSafety } from '../coach/safe.ts';
import type { Proposal } from '../coach/step.ts';
import type { LearntModel } from '../learn/learnt.ts';
import { priorOf } from '../learn/prior.ts';
import { plantWith } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { Checklist } from '../safety/hazard.ts';
import { hazardFiguresOf } from '../safety/hazards.ts';
import { checklistOf } from '../safety/items.ts';

/** What a trial could do: its checklist, and how its rehearsals went. */
export interface TrialDangers {
  readonly checklist: Checklist;
  /** Shares of the rehearsals that leave the limits, and that swing wider; null where nothing is known to rehearse on. */
  readonly outside: number | null;
  readonly growing: number | null;
}

/** Works out the dangers of a proposed trial over all that is known of the machine: its logs, else its nameplate. */
export function dangersOf(
  profile: Profile,
  learnt: LearntModel | null,
  proposal: Proposal,
  seed: number,
): TrialDangers {
  const responses = knownResponses(learnt, priorOf(profile), seed);
  const checklist = checklistOf(profile, hazardFiguresOf(profile, responses, proposal), proposal);
  if (responses === null) return { checklist, outside: null, growing: null };
  const draws = responses.map((response) => ({ response, plant: plantWith(profile, response) }));
  const rehearsal = rehearsalOf(profile, proposal.duration, profile.target.tolerance, seed);
  const { outside, growing } = checkSafety(profile, draws, rehearsal, proposal);
  return { checklist, outside, growing };
}
