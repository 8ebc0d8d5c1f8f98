import { spawn } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { expect, test } from 'vitest';
import { nextStep } from '../../src/coach/next-step.ts';
import type { Proposal, RunHistory } from '../../src/coach/step.ts';
import { readLogBytes } from '../../src/log/read.ts';
import type { Profile } from '../../src/mechanism/profile.ts';
import { parseProfile } from '../../src/profile/document.ts';
import type { Samples } from '../../src/record/samples.ts';

// Ten mechanisms behind a stand-alone simulator that shares no code with src: Stribeck friction, winding inductance, sagging
// supply, sensor noise and delay, jitter, Runge–Kutta at 0.1 ms.
const folder = fileURLToPath(new URL('../fixtures/outside/', import.meta.url));
const names = readdirSync(join(folder, 'profiles')).map((file) => file.replace(/\.json$/, ''));

async function trialOf(
  name: string,
  profile: Profile,
  proposal: Proposal,
  trial: number,
  switches: readonly string[],
): Promise<Samples> {
  const { stage, gains, move, duration, outputCap } = proposal;
  const child = spawn(process.execPath, [
    join(folder, 'simulator.mjs'),
    join(folder, 'mechanisms', `${name}.json`),
    '--seed',
    String(40 + trial),
    ...switches,
  ]);
  child.stdin.end(
    JSON.stringify({
      format: 'holdfast/trial-request@1',
      trial,
      stage,
      gains,
      controller: profile.controller,
      move,
      duration,
      outputCap,
    }),
  );
  const pieces: Buffer[] = [];
  child.stdout.on('data', (piece: Buffer) => pieces.push(piece));
  await new Promise((resolve) => child.on('close', resolve));
  return (await readLogBytes(Buffer.concat(pieces), `trial ${trial}`)).samples;
}

async function run(name: string, switches: readonly string[] = []) {
  const profile = parseProfile(readFileSync(join(folder, 'profiles', `${name}.json`), 'utf8'), name);
  let history: RunHistory = { profile, trials: [], maxTrials: 12, minutesLeft: null, seed: 1 };
  for (;;) {
    const step = nextStep(history);
    if (step.kind === 'stop') return { name, step, trials: history.trials };
    const { stage, gains, move, outputCap, band } = step.proposal;
    const trial = history.trials.length + 1;
    const samples = await trialOf(name, profile, step.proposal, trial, switches);
    history = { ...history, trials: [...history.trials, { trial, stage, gains, move, outputCap, samples, band }] };
  }
}

test('at least 8 of 10 mechanisms with other physics meet their target, in few trials, and none ever swings wider and wider', {
  timeout: 240_000,
}, async () => {
  expect(names).toHaveLength(10);
  const runs = [];
  for (const name of names) runs.push(await run(name));
  const met = runs.filter(({ step }) => step.outcome.met);
  console.info(
    `met ${met.length} of ${runs.length}; trials ${runs.map(({ name, trials }) => `${name.replace('outside-', '')} ${trials.length}`).join(', ')}`,
  );
  expect(met.length).toBeGreaterThanOrEqual(8);
  for (const { step } of runs) {
    for (const reading of step.reading.trials)
      expect(reading.verdicts.map((verdict) => verdict.is)).not.toContain('growing-swing');
  }
});

test('a reversed machine is recognised by its first trial, in the closed loop', { timeout: 120_000 }, async () => {
  for (const name of names) {
    const { step, trials } = await run(name, ['--reversed']);
    expect(step.outcome.met).toBe(false);
    if (trials[0]?.move.from !== 0 && step.outcome.stopped === 'not explained') continue;
    expect(`${name}: ${step.outcome.stopped} after ${trials.length}`).toBe(`${name}: reversed after 1`);
  }
});
