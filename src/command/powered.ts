import type { Profile } from '../mechanism/profile.ts';
import { profileDigest } from '../profile/store.ts';
import { heading, set, spelt, wrapped } from '../report/page.ts';
import { type GateRequest, openGate } from '../safety/gate.ts';
import type { Checklist, GateRefusal, Signature } from '../safety/hazard.ts';
import { afterwards, briefing, trialText } from './checklist-text.ts';
import type { CommandContext } from './command.ts';
import { type Failure, refused } from './failure.ts';
import { dangersOf, type TrialDangers } from './planned-trial.ts';
import type { Admission, AskedTrial } from './run-trials.ts';

/** Rules that only a person's ticks and name can meet; the others are checked before anyone is asked to tick. */
const PERSONAL: readonly GateRefusal['rule'][] = ['ticks', 'name', 'lapsed', 'cap', 'changed'];

/** What the gate is asked about a proposed trial, before anyone has ticked or signed. */
export function gateRequest(profile: Profile, asked: AskedTrial, dangers: TrialDangers, now: number): GateRequest {
  return {
    profile,
    profileDigest: profileDigest(profile),
    trial: asked.trial,
    outputCap: asked.proposal.outputCap,
    stage: asked.proposal.stage,
    directionChecked: asked.history.trials.some(({ stage }) => stage === 'ready'),
    outside: dangers.outside,
    growing: dangers.growing,
    items: dangers.checklist.items,
    signature: null,
    now,
  };
}

/** Why the gate refuses whoever ticks: the profile, the direction check, the rehearsals. */
export function fixedRefusals(request: GateRequest): readonly GateRefusal[] {
  const opening = openGate(request);
  return opening.open ? [] : opening.reasons.filter(({ rule }) => !PERSONAL.includes(rule));
}

/**
 * Leave for the powered trials of one run: prints each trial's checklist, has it ticked item by item and signed at the
 * terminal, and takes it through the gate. Without a person at a terminal every trial is refused; nothing switches it off.
 */
export function poweredAdmission(
  profile: Profile,
  seed: number,
  context: CommandContext,
): (asked: AskedTrial) => Promise<Admission> {
  const { edge } = context;
  let lastName = '';
  return async (asked) => {
    const { proposal, trial } = asked;
    const dangers = dangersOf(profile, asked.reading.learnt, proposal, seed);
    const request = gateRequest(profile, asked, dangers, edge.now());
    const fixed = fixedRefusals(request);
    if (fixed.length > 0) return { open: false, failure: refusal(trial, fixed) };
    if (!edge.terminal.input || !edge.terminal.errors) return { open: false, failure: nobodyThere(trial) };
    const say = (...lines: readonly string[]) => edge.err(`${set(lines, context)}\n`);
    say(heading(`Trial ${trial}: checklist before power`, context));
    say(...wrapped(trialText(proposal, profile), context.width), '');
    say(...briefing(dangers.checklist, profile, context), '');
    const answer = await ticked(dangers.checklist, lastName, context);
    if (answer === null || edge.interrupted.aborted) return { open: 'interrupted' };
    lastName = answer.name;
    const { outputCap, profileDigest } = request;
    const signature = { ...answer, at: edge.now(), outputCap, profileDigest };
    const opening = openGate({ ...request, signature, now: edge.now() });
    if (!opening.open) return { open: false, failure: refusal(trial, opening.reasons) };
    say('', `Signed by ${signature.name}. Trial ${trial} runs now.`);
    say(...afterwards(dangers.checklist, context), '');
    return { open: true, permit: opening.permit };
  };
}

/** Asks for each item, then for the name; null at Ctrl-C or the end of input. An item that is not affirmed ends the asking. */
async function ticked(
  { items }: Checklist,
  lastName: string,
  context: CommandContext,
): Promise<Pick<Signature, 'name' | 'ticked'> | null> {
  const ask = async (question: string) => context.edge.ask(spelt(question, context.style));
  context.edge.err('Tick each item with y; anything else refuses the trial.\n');
  const ids: string[] = [];
  for (const [k, item] of items.entries()) {
    const lines = wrapped(`[${k + 1}/${items.length}] ${item.text} y?`, context.width - 3);
    // The question itself is one line, so that the line editor can keep it.
    for (const line of lines.slice(0, -1)) context.edge.err(`${spelt(line, context.style)}\n`);
    const answer = await ask(`${lines.at(-1)} `);
    if (answer === null) return null;
    if (!/^\s*y(es)?\s*$/i.test(answer)) return { name: lastName, ticked: ids };
    ids.push(item.id);
  }
  const name = await ask(lastName === '' ? 'Who ticked? Name: ' : `Who ticked? Name, or Enter for ${lastName}: `);
  if (name === null) return null;
  return { name: name.trim() === '' ? lastName : name.trim(), ticked: ids };
}

/** A refusal of the gate as a failure to be told. */
export function refusal(trial: number, reasons: readonly GateRefusal[]): Failure {
  const shortest = reasons.slice(0, 4);
  return refused(
    `Trial ${trial} is not powered. ${shortest.map(({ what }) => what).join(' ')}`,
    shortest.map(({ remedy }) => remedy).join(' '),
  );
}

function nobodyThere(trial: number): Failure {
  return refused(
    `Trial ${trial} is not powered: a person has to tick its checklist, and there is no terminal to ask at.`,
    'Run this in a terminal. If the command is a simulation and moves nothing, say so with --plant-is-simulated.',
  );
}
