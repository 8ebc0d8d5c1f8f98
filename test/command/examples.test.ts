import { chmodSync, copyFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, expect, test } from 'vitest';
import { COMMANDS } from '../../src/command/commands.ts';
import { splitWords } from '../../src/command/words.ts';
import { holdfast, OUTSIDE, temporaryFolder } from './harness.ts';
import { csv, put } from './logs.ts';

const examples = (
  await Promise.all(COMMANDS.map(async ({ load }) => (await load()).examples.map(({ line }) => line)))
).flat();

const cwd = temporaryFolder();

/** A folder with everything that the examples name: two logs of the starter lift, a wheel's log, a rig, a simulator. */
beforeAll(async () => {
  const made = temporaryFolder();
  await holdfast(['tune', 'lift', '--plant', 'sim', '--profiles', made], { cwd: made });
  const run = join(made, 'trials/lift/run-0001');
  copyFileSync(join(run, '002-proportional.csv'), join(cwd, 'lift-03.csv'));
  copyFileSync(join(run, '001-ready.csv'), join(cwd, 'lift-04.csv'));
  const wheel = Array.from({ length: 151 }, (_, k) => {
    const t = k / 50;
    const speed = 2000 * (1 - Math.exp(-t / 0.2));
    return [t, 2000, speed, Math.round(speed / 10) * 10, 0.2 + 0.5 * Math.exp(-t / 0.2)];
  });
  put(cwd, 'wheel.csv', csv('time,target,rpm,rpm_filtered,output', wheel));
  // The simulator stands in for rig and simulator alike, with the hoist's physics in metres.
  const start = `import { spawnSync } from 'node:child_process';
const words = ${JSON.stringify([join(OUTSIDE, 'simulator.mjs'), join(OUTSIDE, 'mechanisms/outside-hoist.json')])};
process.exitCode = spawnSync(process.execPath, words, { stdio: 'inherit' }).status ?? 1;\n`;
  writeFileSync(join(cwd, 'simulator.mjs'), start);
  writeFileSync(join(cwd, 'rig'), `#!/bin/sh\nexec '${process.execPath}' simulator.mjs\n`);
  chmodSync(join(cwd, 'rig'), 0o755);
});

test.each(examples)('%s', async (line) => {
  const [program, ...words] = splitWords(line);
  expect(program).toBe('holdfast');
  // A starter is never powered: where an example powers one, that is the answer a person gets until it is copied.
  const powers = words.some((word) => word.startsWith('cmd:./rig')) && words[0] === 'tune';
  // The stand-in for a person's own simulator is another machine than the starter: two trials of it will do.
  const short = words.some((word) => word.startsWith('cmd:')) && words.includes('tune') ? ['--trials', '2'] : [];
  const { code, err } = await holdfast([...words, ...short, '--profiles', cwd], { cwd, answer: () => 'y' });
  expect(err).not.toContain('defect');
  expect([code, err]).toEqual([expect.toBeOneOf(powers ? [4] : [0, 1]), err]);
});
