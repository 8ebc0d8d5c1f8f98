import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { COMMANDS } from '../../src/command/commands.ts';
import { VERSION } from '../../src/command/version.ts';
import { holdfast, holdfastJson, temporaryFolder } from './harness.ts';
import { errorResult } from './shapes.ts';

const cwd = temporaryFolder();

test('the version is package.json’s', () => {
  const { version } = JSON.parse(readFileSync(join(import.meta.dirname, '../../package.json'), 'utf8'));
  expect(VERSION).toBe(version);
});

test('help names every command and option, within 80 columns, and ends with 0', async () => {
  const { code, out, err } = await holdfast(['--help'], { cwd });
  expect(code).toBe(0);
  expect(err).toBe('');
  for (const { name } of COMMANDS) expect(out).toMatch(new RegExp(`^  ${name}\\b`, 'm'));
  for (const option of ['--json', '--seed <n>', '--profiles <dir>', '--ascii', '--no-colour'])
    expect(out).toContain(option);
  for (const line of out.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
});

test('commands that are not built yet are not shown', async () => {
  const { out } = await holdfast(['--help'], { cwd });
  for (const later of ['change', 'health', 'snapshot', 'compare', 'restore', 'card']) {
    expect(out).not.toMatch(new RegExp(`^  ${later}\\b`, 'm'));
  }
});

test.each(COMMANDS.map(({ name }) => name))(
  '%s --help shows its options, the global ones and examples',
  async (name) => {
    const { code, out } = await holdfast([name, '--help'], { cwd });
    expect(code).toBe(0);
    expect(out).toContain('Global Options:');
    expect(out).toMatch(/Examples:\n {2}holdfast /);
  },
);

test('in ASCII the help holds nothing else', async () => {
  const { out } = await holdfast(['--ascii', '--help'], { cwd });
  expect(out).toMatch(/^[\n\u0020-\u007e]+$/);
});

test.each([
  [['frobnicate'], 'unknown command'],
  [['tunes', 'lift'], 'Did you mean tune?'],
  [['read'], 'missing required argument'],
  [['read', 'x.csv', '--fast'], 'unknown option'],
  [['read', 'x.csv', 'y.csv'], 'too many arguments'],
  [['tune', 'lift'], '--plant'],
  [['tune', 'lift', '--plant', 'magic'], 'no such plant'],
  [['tune', 'lift', '--plant', 'cmd:'], 'no such plant'],
  [['tune', 'lift', '--plant', 'cmd:"./rig'], 'closing'],
  [['demo', '--seed', '-3'], 'whole number'],
  [['demo', '--seed', '1.5'], 'whole number'],
  [['read', 'x.csv', '--column', 'speed=rpm'], 'ROLE=HEADER'],
  [['read', 'x.csv', '--unit', 'furlong'], 'Allowed choices'],
  [['predict', 'lift', '--kp', 'high'], 'Give a number'],
  [['predict', 'lift', '--kp', '1', '--move', '0.2'], 'FROM:TO'],
])('wrong use: %j ends with 2 and says what is wrong', async (words, says) => {
  const { code, out, err } = await holdfast([...words, '--profiles', cwd], { cwd });
  expect(code).toBe(2);
  expect(out).toBe('');
  expect(err).toContain(says);
  const json = await holdfastJson([...words, '--profiles', cwd], { cwd });
  expect(json.code).toBe(2);
  expect(errorResult.parse(json.document)).toMatchObject({ exit: 2 });
  expect(json.err).toBe('');
});

test('no arguments: the console on a terminal, the help and 2 without one', async () => {
  expect((await holdfast([], { cwd, answer: () => null })).code).toBe('console');
  expect((await holdfast(['--profiles', 'x'], { cwd, answer: () => null })).code).toBe('console');
  const piped = await holdfast([], { cwd });
  expect(piped.code).toBe(2);
  expect(piped.out).toBe('');
  expect(piped.err).toContain('Usage: holdfast');
});

test('a defect ends with 5 and a short message; the stack only with HOLDFAST_DEBUG=1', async () => {
  const broken = () => {
    throw new Error('the clock broke');
  };
  const words = ['checklist', 'lift', '--profiles', cwd];
  const { code, out, err } = await holdfast(words, { cwd, now: broken });
  expect(code).toBe(5);
  expect(out).toBe('');
  expect(err).toContain('defect in Holdfast: the clock broke');
  expect(err).not.toContain('    at ');
  const shown = await holdfast(words, { cwd, now: broken, env: { HOLDFAST_DEBUG: '1' } });
  expect(shown.err).toContain('    at ');
  const json = await holdfastJson(words, { cwd, now: broken });
  expect(errorResult.parse(json.document)).toMatchObject({ exit: 5 });
});
