import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { lastWords, type ProcessBounds, runProcess } from '../../src/command/outside-process.ts';
import { splitWords, UnclosedQuote } from '../../src/command/words.ts';

const folder = mkdtempSync(join(tmpdir(), 'holdfast-outside-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

const FIXTURES = join(import.meta.dirname, '../fixtures/outside');
const REQUEST = JSON.stringify({
  format: 'holdfast/trial-request@1',
  trial: 1,
  stage: 'proportional',
  gains: { kp: 1, ki: 0, kd: 0, zone: null, hold: 0, pace: 0 },
  controller: JSON.parse(readFileSync(join(FIXTURES, 'profiles/outside-cart.json'), 'utf8')).controller,
  move: { from: 0.8, to: 1.8 },
  duration: 0.5,
  outputCap: 1,
});

function bounds(changed: Partial<ProcessBounds> = {}): ProcessBounds {
  return { cwd: folder, timeout: 20_000, mostOutput: 1e6, interrupted: new AbortController().signal, ...changed };
}

const simulator = (...switches: string[]) => [
  process.execPath,
  join(FIXTURES, 'simulator.mjs'),
  join(FIXTURES, 'mechanisms/outside-cart.json'),
  ...switches,
];

/** Is a process still there? Signal 0 asks without harm. */
function alive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return readFileSync(`/proc/${pid}/stat`, 'utf8').split(' ')[2] !== 'Z';
  } catch {
    return false;
  }
}

async function until(condition: () => boolean): Promise<void> {
  while (!condition()) await new Promise((resolve) => setTimeout(resolve, 20));
}

test('a command that answers is read whole', async () => {
  const end = await runProcess(simulator(), REQUEST, bounds());
  if (end.kind !== 'exited') throw new Error(end.kind);
  expect(end.code).toBe(0);
  expect(end.output.toString().split('\n')[0]).toBe('time,setpoint,measured,output');
  // 0.5 s at 50 Hz with jitter: 25 or 26 ticks, one header, one end of line.
  expect(Math.abs(end.output.toString().split('\n').length - 28)).toBeLessThanOrEqual(1);
});

test('a failing command tells its exit code, and what it said without colours or bells', async () => {
  const end = await runProcess(simulator('--fail'), REQUEST, bounds());
  if (end.kind !== 'exited') throw new Error(end.kind);
  expect(end.code).toBe(7);
  expect(end.said).toContain('\u001b');
  expect(lastWords(end.said)).toBe('no answer from the bridge\nchecked port 3, port 4');
});

test('a command that hangs is ended with everything that it started', async () => {
  const pids = join(folder, 'pids');
  const end = await runProcess(simulator('--hang-with-child', '--pid-file', pids), REQUEST, bounds({ timeout: 1500 }));
  expect(end.kind).toBe('timed-out');
  const left = readFileSync(pids, 'utf8').split('\n').map(Number);
  expect(left).toHaveLength(2);
  await until(() => left.every((pid) => !alive(pid)));
});

test('an interruption ends a running command', async () => {
  const stop = new AbortController();
  const pids = join(folder, 'pids-2');
  const running = runProcess(simulator('--hang', '--pid-file', pids), REQUEST, bounds({ interrupted: stop.signal }));
  await until(() => {
    try {
      return readFileSync(pids, 'utf8') !== '';
    } catch {
      return false;
    }
  });
  stop.abort();
  expect((await running).kind).toBe('interrupted');
  await until(() => !alive(Number(readFileSync(pids, 'utf8'))));
});

test('output without end is cut off', async () => {
  const end = await runProcess(simulator('--flood'), REQUEST, bounds());
  expect(end.kind).toBe('flooded');
});

test('a command that closes its input early is judged by its exit, not by the broken pipe', async () => {
  const large = `${REQUEST}${' '.repeat(1e6)}`;
  const end = await runProcess(simulator('--deaf-to-input'), large, bounds());
  if (end.kind !== 'exited') throw new Error(end.kind);
  expect(end.code).toBe(1);
  expect(end.said).toContain('could not read the request');
});

test('a command that is not there is told as not started', async () => {
  const end = await runProcess([join(folder, 'nothing-here')], REQUEST, bounds());
  expect(end).toMatchObject({ kind: 'not-started' });
});

test('words are parted without a shell', () => {
  expect(splitWords(`node sim.mjs 'a b'  "c \\"d\\"" e\\ f`)).toEqual(['node', 'sim.mjs', 'a b', 'c "d"', 'e f']);
  expect(splitWords('C:\\rig\\run.exe --port 3')).toEqual(['C:\\rig\\run.exe', '--port', '3']);
  expect(splitWords(`a '' b$HOME "*"`)).toEqual(['a', '', 'b$HOME', '*']);
  expect(splitWords('   ')).toEqual([]);
  expect(() => splitWords('node "open')).toThrow(UnclosedQuote);
});

test('what a command says is made safe to print and kept short', () => {
  const said = `\u001b]0;title\u0007one\r\n\u001b[2Jtwo\u0000\n${'x'.repeat(500)}\n\u202ethree`;
  const words = lastWords(said, 3);
  expect(words.split('\n')).toEqual(['two', `${'x'.repeat(199)}…`, 'three']);
});
