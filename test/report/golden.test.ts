import { join } from 'node:path';
import { expect, test } from 'vitest';
import { checklistText } from '../../src/report/checklist.ts';
import { figuresTable } from '../../src/report/figures.ts';
import { ledgerTable, trialLine } from '../../src/report/ledger.ts';
import { marginsText } from '../../src/report/margins.ts';
import { modelTable } from '../../src/report/model.ts';
import { outcomeText, proposalText } from '../../src/report/proposal.ts';
import { verdictLines } from '../../src/report/verdicts.ts';
import { hazardFiguresOf } from '../../src/safety/hazards.ts';
import { checklistOf } from '../../src/safety/items.ts';
import { ASCII, figures, gains, learnt, lift, proposal, reading, record, UNICODE } from './made.ts';

// Texts as they are read, all on one sheet; read the difference aloud before you take a new one:
//   npx vitest run --project unit test/report -u && git diff test/golden
const margins = { gain: 4.893, phase: 39.19, delay: 0.1033, maxSensitivity: 1.808, spectralRadius: 0.95 };
const checklist = checklistOf(lift, hazardFiguresOf(lift, [learnt.response], proposal), proposal);
const trials = [
  {
    record: { ...record, trial: 2, stage: 'proportional' as const, gains: { ...gains, ki: 0, kd: 0, zone: null } },
    reading: { ...reading, inBand: null },
  },
  { record, reading },
];

function sheet(page: typeof UNICODE | typeof ASCII): string {
  return [
    proposalText(proposal, 4, lift, page),
    figuresTable(figures, lift, 'target', page),
    verdictLines(reading.verdicts, page),
    verdictLines([], page),
    ledgerTable(trials, lift, page),
    trialLine({ record, reading }, lift, page),
    marginsText(margins, page),
    marginsText({ ...margins, gain: null, phase: 20, delay: null }, page),
    marginsText({ ...margins, spectralRadius: 1.02 }, page),
    modelTable(learnt, lift, page),
    outcomeText(
      { met: true, stopped: 'target met', gains, why: 'Met in trials on the move of the target.', margins },
      6,
      lift,
      page,
    ),
    checklistText(checklist, lift, page, ['disable', 'voice']),
    '',
  ].join('\n\n');
}

test('every text, in Unicode', async () => {
  await expect(sheet(UNICODE)).toMatchFileSnapshot(join(import.meta.dirname, '../golden/report-texts.txt'));
});

test('every text, in plain ASCII', async () => {
  await expect(sheet(ASCII)).toMatchFileSnapshot(join(import.meta.dirname, '../golden/report-texts-ascii.txt'));
});
