import type { Proposal } from '../coach/step.ts';
import type { Profile } from '../mechanism/profile.ts';
import { moveText, seconds } from '../report/amounts.ts';
import { dangerRows } from '../report/checklist.ts';
import { hanging, type Page, table } from '../report/page.ts';
import type { Checklist } from '../safety/hazard.ts';
import { capWords } from '../safety/readback.ts';

/** The trial that is to be powered, in one line. */
export function trialText({ move, outputCap, duration }: Proposal, profile: Profile): string {
  return `${moveText(move, profile)}, logged for ${seconds(duration)}, output at most ${capWords(outputCap, profile)}`;
}

/** What a person at a terminal is told before the items of a checklist are asked one by one. */
export function briefing(checklist: Checklist, profile: Profile, page: Page): readonly string[] {
  return [
    'What this trial can do, at its worst',
    ...table(dangerRows(checklist.figures, profile), ['left', 'left'], page),
    '',
    'Disable at once if',
    ...bullets(checklist.abort, page),
    '',
    ...checklist.cautions.flatMap((text) => hanging('', text, page, 0)),
  ];
}

/** What comes after the trial, before any hand. */
export function afterwards({ after }: Checklist, page: Page): readonly string[] {
  return ['After', ...bullets(after, page)];
}

const bullets = (texts: readonly string[], page: Page) => texts.flatMap((text) => hanging('  -', text, page, 4));
