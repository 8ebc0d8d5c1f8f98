import { copyFileSync, existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { holdfast, holdfastJson, snapshotOf, temporaryFolder } from './harness.ts';
import { errorResult, tuneResult } from './shapes.ts';

const words = (folder: string, plant = 'sim', profile = 'lift') => [
  'tune',
  profile,
  '--plant',
  plant,
  '--profiles',
  folder,
];

describe('on the profile’s physics', () => {
  test('the result is the contract’s, every trial is kept, and standard output holds one document only', async () => {
    const folder = temporaryFolder();
    const { code, document, err } = await holdfastJson(words(folder), { cwd: folder });
    const result = tuneResult.parse(document);
    expect(code).toBe(0);
    expect(result).toMatchObject({ profile: 'lift', met: true, stopped: 'target met' });
    expect(result.trials.map(({ trial }) => trial)).toEqual(result.trials.map((_, k) => k + 1));
    expect(result.trials[0]?.stage).toBe('ready');
    for (const { log } of result.trials) {
      expect(readFileSync(join(folder, log ?? ''), 'utf8')).toMatch(/^time,setpoint,measured,output/);
    }
    expect(err).toContain('trial 1: ready');
    expect(result.model?.topSpeed[1]).toBeLessThan(result.model?.topSpeed[2] ?? 0);
  });

  test('the page tells proposal, reason, promise, chart, figures and verdict of each trial, then the gains', async () => {
    const folder = temporaryFolder();
    const { out } = await holdfast(words(folder), { cwd: folder });
    for (const label of ['Gains ', 'Move ', 'Why ', 'Promise ', 'Watch ', 'Verdict ', 'Band ', 'Logs ', 'Next ']) {
      expect(out).toMatch(new RegExp(`^${label}`, 'm'));
    }
    expect(out).toContain('promised, 9 times in 10');
    expect(out).toContain('proven on the profile’s physics only');
    for (const line of out.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
  });

  test('an interrupted run goes on where it was, to the same end', async () => {
    const whole = temporaryFolder();
    const parts = temporaryFolder();
    const uninterrupted = await holdfastJson(words(whole), { cwd: whole });
    const stop = new AbortController();
    const first = await holdfast(words(parts), {
      cwd: parts,
      interrupted: stop.signal,
      watch: (text) => {
        if (text.includes('Trial 2 · ')) stop.abort();
      },
    });
    expect(first.code).toBe(130);
    expect(first.err).toContain('2 trials are kept in run-0001');
    const resumed = await holdfastJson(words(parts), { cwd: parts });
    expect(resumed.err).toContain('Resuming run-0001 after trial 2');
    expect(resumed.document).toEqual(uninterrupted.document);
    const again = await holdfastJson([...words(parts), '--fresh'], { cwd: parts });
    expect(JSON.stringify(again.document)).toContain('run-0002');
  });

  test('trials used up: 1, and what was reached', async () => {
    const folder = temporaryFolder();
    const { code, document } = await holdfastJson([...words(folder), '--trials', '1'], { cwd: folder });
    expect(code).toBe(1);
    expect(tuneResult.parse(document)).toMatchObject({ met: false, stopped: 'trials used up' });
  });

  test('a machine that is not known cannot be simulated: 3, and where to look', async () => {
    const folder = temporaryFolder();
    const { code, document } = await holdfastJson(words(folder, 'sim', 'slide'), { cwd: folder });
    expect(code).toBe(3);
    expect(errorResult.parse(document).where.field).toBe('motor');
  });

  test('a kept log that was changed is not built on', async () => {
    const folder = temporaryFolder();
    const stop = new AbortController();
    await holdfast(words(folder), {
      cwd: folder,
      interrupted: stop.signal,
      watch: (text) => {
        if (text.includes('Trial 1 · ')) stop.abort();
      },
    });
    const log = join(folder, 'trials/lift/run-0001/001-ready.csv');
    writeFileSync(log, readFileSync(log, 'utf8').replace('0.2', '0.3'));
    const { code, document } = await holdfastJson(words(folder), { cwd: folder });
    expect(code).toBe(3);
    expect(errorResult.parse(document)).toMatchObject({ where: { file: 'trials/lift/run-0001/001-ready.csv' } });
  });
});

test('on a model fitted to a log', async () => {
  const folder = temporaryFolder();
  await holdfast(words(folder), { cwd: folder });
  copyFileSync(join(folder, 'trials/lift/run-0001/002-proportional.csv'), join(folder, 'a.csv'));
  const { code, document } = await holdfastJson(words(folder, 'log:a.csv'), { cwd: folder });
  expect(code).toBe(0);
  expect(tuneResult.parse(document).met).toBe(true);
});

describe('a profile that cannot be used is refused with 3 and left as it is', () => {
  const good = readFileSync(join(import.meta.dirname, '../../profiles/lift.json'), 'utf8');
  test.each([
    ['not JSON', '{ "format": "holdfast/profile@1", ', 'not JSON'],
    ['another format', good.replace('holdfast/profile@1', 'someone/else@1'), 'was expected'],
    ['a newer format', good.replace('holdfast/profile@1', 'holdfast/profile@9'), 'Update Holdfast'],
    ['no format', good.replace('"format": "holdfast/profile@1",', ''), 'no format'],
    ['a wrong number', good.replace(/"reduction": [\d.]+/, '"reduction": -3'), 'drive.reduction'],
    ['a wrong unit', good.replace('"unit": "m"', '"unit": "furlong"'), 'unit'],
    ['a text', 'lift: 12 to 1', 'not JSON'],
    ['nothing', '', 'not JSON'],
  ])('%s', async (_, content, says) => {
    const folder = temporaryFolder();
    writeFileSync(join(folder, 'lift.json'), content);
    const before = snapshotOf(folder);
    const { code, err } = await holdfast(words(folder), { cwd: folder });
    expect(code).toBe(3);
    expect(err).toContain('lift.json');
    expect(err).toContain(says);
    const json = await holdfastJson(words(folder), { cwd: folder });
    expect(errorResult.parse(json.document).exit).toBe(3);
    expect(snapshotOf(folder)).toEqual(before);
  });

  test('a name that nothing has', async () => {
    const folder = temporaryFolder();
    const { code, err } = await holdfast(words(folder, 'sim', 'lfit'), { cwd: folder });
    expect(code).toBe(3);
    expect(err).toContain('Starters are arm, drivetrain, lift');
  });

  test('a path: found, missing, and a folder', async () => {
    const folder = temporaryFolder();
    mkdirSync(join(folder, 'robot'));
    writeFileSync(join(folder, 'robot/lift.json'), good);
    const told = (path: string) => holdfast(['checklist', path], { cwd: folder });
    expect((await told('robot/lift.json')).code).toBe(0);
    expect((await told('robot/left.json')).err).toContain('no such file');
    expect((await told('robot/')).err).toContain('folder');
    expect(existsSync(join(folder, 'robot/trials'))).toBe(false);
  });
});
