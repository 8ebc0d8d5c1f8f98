import type { LearntModel, Prior } from '../learn/learnt.ts';
import { drawPrior } from '../learn/prior.ts';
import { rigidPlants } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { PlantModel, ResponseModel } from '../plant/response-model.ts';
import { machineKnown } from './ready.ts';

/** Draws that search, promise and safety share. */
export const DRAWS = 64;

/** One way that reality may be: a plant to rehearse on. */
export interface Draw {
  readonly response: ResponseModel;
  readonly plant: PlantModel;
}

/** What the machine may be: drawn from its logs, else from its nameplate; null when neither says anything. */
export function knownResponses(
  learnt: LearntModel | null,
  prior: Prior,
  seed: number,
): readonly ResponseModel[] | null {
  if (learnt !== null) return learnt.draws;
  return machineKnown(prior) ? drawPrior(prior, DRAWS, seed) : null;
}

/** Responses with the plants that answer so. */
export function drawsOf(profile: Profile, responses: readonly ResponseModel[]): readonly Draw[] {
  return rigidPlants(profile, responses).map((plant) => ({ response: plant.response, plant }));
}
