import type { Outcome, Proposal } from '../coach/step.ts';
import type { Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { capWords } from '../safety/readback.ts';
import { moveText, seconds } from './amounts.ts';
import { gainsLine, gainsTable } from './gains.ts';
import { marginsText } from './margins.ts';
import { hanging, heading, type Page, set } from './page.ts';

/** The next trial: what to enter, why, what to expect, and what would change the coach's mind. */
export function proposalText(proposal: Proposal, trial: number, profile: Profile, page: Page): string {
  const line = (label: string, text: string) => hanging(label, text, page);
  const { move, duration, outputCap, boundedBy } = proposal;
  const lines = [
    heading(`Trial ${trial} · ${proposal.stage}`, page),
    'Enter on the robot',
    ...gainsTable(proposal.gains, profile, page)
      .split('\n')
      .map((row) => `  ${row}`),
    ...line(
      'Move',
      `${moveText(move, profile)}, logged for ${seconds(duration)}, output at most ${capWords(outputCap, profile)}`,
    ),
    ...line('Why', proposal.why),
    ...(boundedBy === null ? [] : line('Held by', `${boundedBy}.`)),
    ...line('Promise', proposal.expect),
    ...line('Watch', proposal.unless),
  ];
  return set(lines, page);
}

/** How a run ended, the gains to hold, and how sure they are. */
export function outcomeText(outcome: Outcome, trials: number, profile: Profile, page: Page): string {
  const count = `${trials} ${trials === 1 ? 'trial' : 'trials'}`;
  const said = outcome.met ? 'Target met' : `Target not met: ${outcome.stopped}`;
  return set(
    [
      heading(`${said}, after ${count}`, page),
      ...hanging('Gains', heldText(outcome.met, outcome.gains, profile), page),
      ...hanging('Why', outcome.why, page),
      ...(outcome.margins === null ? [] : marginsText(outcome.margins, page).split('\n')),
    ],
    page,
  );
}

function heldText(met: boolean, gains: Gains, profile: Profile): string {
  const none = gains.kp === 0 && gains.ki === 0 && gains.kd === 0;
  return !met && none ? 'None were proven: enter none.' : gainsLine(gains, profile);
}
