import { copyFileSync, existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { holdfast, holdfastJson, OUTSIDE, outsideProfile, temporaryFolder, type World } from './harness.ts';
import { errorResult, tuneResult } from './shapes.ts';

/**
 * A folder with a profile and `rig.mjs`, a command that runs the outside simulator with the switches in `switches.json`: so
 * that it can break and be mended between two starts of the same command line.
 */
function rig(mechanism: string, ...switches: readonly string[]) {
  const folder = temporaryFolder();
  copyFileSync(outsideProfile(mechanism), join(folder, `${mechanism}.json`));
  const simulator = [join(OUTSIDE, 'simulator.mjs'), join(OUTSIDE, `mechanisms/${mechanism}.json`)];
  writeFileSync(
    join(folder, 'rig.mjs'),
    `import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
const words = [...${JSON.stringify(simulator)}, ...JSON.parse(readFileSync('switches.json', 'utf8'))];
process.exitCode = spawnSync(process.execPath, words, { stdio: 'inherit' }).status ?? 1;
`,
  );
  const change = (...now: readonly string[]) => writeFileSync(join(folder, 'switches.json'), JSON.stringify(now));
  change(...switches);
  const words = ['tune', mechanism, '--plant', `cmd:'${process.execPath}' rig.mjs`, '--profiles', folder];
  return { folder, change, words, run: () => join(folder, 'trials', mechanism, 'run-0001') };
}

const SIMULATED = '--plant-is-simulated';

test('a rig with richer physics is tuned to its target, and the request is the contract’s', async () => {
  const { folder, words } = rig('outside-cart', '--request-file', 'request.json');
  const { code, document } = await holdfastJson([...words, SIMULATED], { cwd: folder });
  expect(code).toBe(0);
  expect(tuneResult.parse(document).met).toBe(true);
  const request = JSON.parse(readFileSync(join(folder, 'request.json'), 'utf8'));
  expect(Object.keys(request)).toEqual([
    'format',
    'trial',
    'stage',
    'gains',
    'controller',
    'move',
    'duration',
    'outputCap',
  ]);
  const profile = JSON.parse(readFileSync(join(folder, 'outside-cart.json'), 'utf8'));
  expect(request.controller).toEqual(profile.controller);
  expect(Object.keys(request.gains)).toEqual(['kp', 'ki', 'kd', 'zone', 'hold', 'pace']);
  expect(profile.target.moves).toContainEqual([request.move.from, request.move.to]);
});

describe('a command that lets its caller down: 3, nothing lost, and the run goes on', () => {
  test.each([
    ['--fail', 'exit code 7', 'no answer from the bridge'],
    ['--rubbish', 'does not read', 'text'],
    ['--truncate', 'does not read', 'asked for'],
    ['--nan', 'does not read', 'NaN'],
    ['--empty', 'does not read', 'empty'],
    ['--deaf-to-input', 'exit code 1', 'could not read the request'],
  ])('%s', async (kind, says, also) => {
    const { folder, words, run } = rig('outside-hoist', kind);
    const failed = await holdfastJson([...words, SIMULATED], { cwd: folder });
    const error = errorResult.parse(failed.document);
    expect(failed.code).toBe(3);
    expect(error.what).toContain(says);
    expect(error.what).toContain(also);
    expect(error.what).not.toMatch(/[\u0000-\u0009\u000b-\u001f]/);
    expect(error.remedy).toContain('the same command goes on from there');
    const kept = JSON.parse(readFileSync(join(run(), 'run.json'), 'utf8'));
    expect(kept.trials).toEqual([]);
    expect(kept.status).toBe('open');
  });

  test('the same command goes on once the rig is mended', async () => {
    const { folder, change, words } = rig('outside-hoist', '--fail', '--from-trial', '2');
    expect((await holdfast([...words, SIMULATED], { cwd: folder })).code).toBe(3);
    change();
    const mended = await holdfastJson([...words, SIMULATED], { cwd: folder });
    expect(mended.code).toBe(0);
    expect(mended.err).toContain('Resuming run-0001 after trial 1');
    expect(tuneResult.parse(mended.document).met).toBe(true);
  });

  test('a hang ends at --plant-timeout', async () => {
    const { folder, words } = rig('outside-hoist', '--hang-with-child');
    const { code, document } = await holdfastJson([...words, SIMULATED, '--plant-timeout', '1'], { cwd: folder });
    expect(code).toBe(3);
    expect(errorResult.parse(document).what).toContain('no log within 1 s');
  });

  test('a command that is not there', async () => {
    const { folder } = rig('outside-hoist');
    const words = ['tune', 'outside-hoist', '--plant', 'cmd:./no-such-rig', '--profiles', folder, SIMULATED];
    const { code, err } = await holdfast(words, { cwd: folder });
    expect(code).toBe(3);
    expect(err).toContain('did not start');
  });
});

describe('a machine that is wrongly built is not tuned: the run stops with 1 and says what to mend', () => {
  test.each([
    ['a stuck sensor', ['--stuck'], /^(deaf|frozen)$/],
    ['metres for inches', ['--scale', '0.0254'], /^wrong-scale$/],
    ['degrees for radians', ['--scale', '57.29578'], /^(wrong-scale|jumps)$/],
  ])('%s', async (_, switches, stopped) => {
    const { folder, words } = rig('outside-cart', ...switches);
    const { code, document } = await holdfastJson([...words, SIMULATED], { cwd: folder });
    const result = tuneResult.parse(document);
    expect(code).toBe(1);
    expect(result.stopped).toMatch(stopped);
    expect(result.met).toBe(false);
    expect(result.trials.every(({ stage }) => stage === 'ready')).toBe(true);
  });
});

describe('real machinery', () => {
  const person =
    (name: string, refuses?: RegExp): World['answer'] =>
    (question) =>
      question.startsWith('Who ticked?') ? name : refuses?.test(question) ? 'n' : 'y';

  test('without a person at a terminal nothing is powered: 4, and the command is never started', async () => {
    const { folder, words } = rig('outside-cart', '--request-file', 'request.json');
    const { code, document } = await holdfastJson(words, { cwd: folder });
    expect(code).toBe(4);
    expect(errorResult.parse(document).what).toContain('has to tick its checklist');
    expect(existsSync(join(folder, 'request.json'))).toBe(false);
  });

  test('each trial is ticked item by item and signed, and the signature is kept with it', async () => {
    const { folder, words, run } = rig('outside-cart');
    const asked: string[] = [];
    const tick = person('Kim');
    const { code } = await holdfast(words, {
      cwd: folder,
      answer: (question) => {
        asked.push(question);
        return tick?.(question) ?? null;
      },
    });
    expect(code).toBe(0);
    const { trials } = JSON.parse(readFileSync(join(run(), 'run.json'), 'utf8'));
    expect(trials.length).toBeGreaterThan(1);
    expect(asked.filter((question) => question.startsWith('Who ticked?'))).toHaveLength(trials.length);
    for (const trial of trials) {
      expect(trial.signature.name).toBe('Kim');
      expect(trial.signature.ticked).toEqual(expect.arrayContaining(['disable', 'readback', 'drives-blocks']));
      expect(trial.signature.outputCap).toBe(trial.outputCap);
    }
  });

  test('an item that is not ticked, or a missing name, refuses the trial', async () => {
    for (const answer of [person('Kim', /eye protection/i), person('')]) {
      const { folder, words } = rig('outside-cart', '--request-file', 'request.json');
      const { code, err } = await holdfast(words, { cwd: folder, answer });
      expect(code).toBe(4);
      expect(err).toMatch(/Not ticked: Eye protection|Nobody has signed/);
      expect(existsSync(join(folder, 'request.json'))).toBe(false);
    }
  });

  test('Ctrl-C at an item ends with 130, and the run stays open', async () => {
    const { folder, words, run } = rig('outside-cart');
    const { code } = await holdfast(words, { cwd: folder, answer: () => null });
    expect(code).toBe(130);
    expect(JSON.parse(readFileSync(join(run(), 'run.json'), 'utf8')).status).toBe('open');
  });

  test('ticks that took longer than 15 minutes have lapsed', async () => {
    const { folder, words } = rig('outside-cart');
    let now = Date.UTC(2026, 4, 2, 9, 0);
    const tick = person('Kim');
    const answer: World['answer'] = (question) => tick?.(question) ?? null;
    // The clock stands while items are ticked and runs on between signing and the gate.
    const { code, err } = await holdfast(words, { cwd: folder, answer, now: () => (now += 16 * 60_000) });
    expect(code).toBe(4);
    expect(err).toContain('more than 15 minutes old');
  });

  test.each([
    [
      'travel limits',
      (profile: Record<string, unknown>) => ({ ...profile, limits: { min: null, max: null, outputCap: 1 } }),
    ],
    ['hazards', (profile: Record<string, unknown>) => ({ ...profile, hazards: [] })],
  ])('a profile without %s is refused before anyone is asked', async (what, without) => {
    const { folder, words } = rig('outside-cart');
    const path = join(folder, 'outside-cart.json');
    writeFileSync(path, JSON.stringify(without(JSON.parse(readFileSync(path, 'utf8')))));
    const asked: string[] = [];
    const { code, err } = await holdfast(words, {
      cwd: folder,
      answer: (question) => {
        asked.push(question);
        return 'y';
      },
    });
    expect(code).toBe(4);
    expect(err.toLowerCase()).toContain(what);
    expect(asked).toEqual([]);
  });

  test('a starter is never powered', async () => {
    const folder = temporaryFolder();
    const words = ['tune', 'lift', '--plant', 'cmd:./rig', '--profiles', folder];
    const { code, err } = await holdfast(words, { cwd: folder, answer: person('Kim') });
    expect(code).toBe(4);
    expect(err).toContain('is a starter');
  });
});
