import { spawnSync } from 'node:child_process';
import { copyFileSync, existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import * as pty from '@lydell/node-pty';
import xterm from '@xterm/headless';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';

const MAIN = join(import.meta.dirname, '../../dist/main.js');
const OUTSIDE = join(import.meta.dirname, '../fixtures/outside');
const LOG = 'time,setpoint,measured,output\n';

const folder = mkdtempSync(join(tmpdir(), 'holdfast-terminal-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));
beforeAll(() => {
  if (!existsSync(MAIN)) throw new Error('dist/main.js is missing: npm run build');
  const rows = Array.from({ length: 200 }, (_, k) => `${k / 50},1,${1 - Math.exp(-k / 20)},${Math.exp(-k / 20)}`);
  writeFileSync(join(folder, 'move.csv'), LOG + rows.join('\n'));
});

/** The variables of a plain UTF-8 terminal; CI is left out because it changes how programs draw. */
const { PATH = '' } = process.env;
const ENVIRONMENT = { PATH, HOME: folder, LANG: 'C.UTF-8', TERM: 'xterm-256color' };

/** A program in a pseudo-terminal: what it sent, what the screen shows, and when it ended. */
function open(words: readonly string[], env: Record<string, string> = {}, size = { cols: 80, rows: 24 }) {
  const screen = new xterm.Terminal({ ...size, scrollback: 5000, allowProposedApi: true });
  const child = pty.spawn(process.execPath, [MAIN, ...words], {
    ...size,
    cwd: folder,
    env: { ...ENVIRONMENT, ...env },
  });
  let raw = '';
  child.onData((text) => {
    raw += text;
    screen.write(text);
  });
  const ended = new Promise<number>((resolve) => child.onExit(({ exitCode }) => resolve(exitCode)));
  return {
    write: (text: string) => child.write(text),
    raw: () => raw,
    ended,
    /** Waits until what was sent matches; polls, never sleeps for a fixed time. */
    shows: async (pattern: RegExp) => {
      while (!pattern.test(plain(raw))) await new Promise((resolve) => setTimeout(resolve, 10));
    },
    cursorRow: () => screen.buffer.active.cursorY,
    cursorColumn: () => screen.buffer.active.cursorX,
    buffer: () => screen.buffer.active.type,
    /** Rows that the terminal had to break because they were too long for it. */
    brokenRows: async () => {
      await new Promise<void>((resolve) => screen.write('', resolve));
      const { active } = screen.buffer;
      return Array.from({ length: active.length }, (_, row) => active.getLine(row)).filter((line) => line?.isWrapped)
        .length;
    },
  };
}

const plain = (text: string) => text.replaceAll(/\u001b\[[0-9;?]*[A-Za-z]/g, '');
const COLOUR = /\u001b\[[0-9;]*m/;

describe('demo', () => {
  test('fits an 80 × 24 terminal, in colour', async () => {
    const terminal = open(['demo', '--profiles', join(folder, 'none')]);
    expect(await terminal.ended).toBe(0);
    expect(terminal.raw()).toMatch(COLOUR);
    expect(plain(terminal.raw())).toContain('What the trials found out');
    expect(await terminal.brokenRows()).toBe(0);
    expect(terminal.buffer()).toBe('normal');
  });

  test('uses a wider terminal', async () => {
    const terminal = open(['demo', '--profiles', join(folder, 'none')], {}, { cols: 120, rows: 40 });
    expect(await terminal.ended).toBe(0);
    const longest = Math.max(
      ...plain(terminal.raw())
        .split(/\r?\n/)
        .map((line) => line.length),
    );
    expect(longest).toBe(120);
    expect(await terminal.brokenRows()).toBe(0);
  });

  test('NO_COLOR, --no-colour and TERM=dumb each keep every escape sequence away', async () => {
    for (const [words, env] of [
      [[], { NO_COLOR: '1' }],
      [['--no-colour'], {}],
      [[], { TERM: 'dumb' }],
    ] as const) {
      const terminal = open(['demo', 'turret', '--profiles', join(folder, 'none'), ...words], env);
      expect(await terminal.ended).toBe(0);
      expect(terminal.raw()).not.toContain('\u001b');
    }
  });

  test('--ascii sends nothing but ASCII', async () => {
    const terminal = open(['demo', '--ascii', '--no-colour', '--profiles', join(folder, 'none')]);
    expect(await terminal.ended).toBe(0);
    expect(terminal.raw()).toMatch(/^[\r\n\u0020-\u007e]+$/);
  });
});

/** A folder with a profile and a rig that runs the outside simulator with the switches of the moment. */
function rig(name: string) {
  const at = mkdtempSync(join(folder, 'rig-'));
  copyFileSync(join(OUTSIDE, `profiles/${name}.json`), join(at, `${name}.json`));
  const simulator = [join(OUTSIDE, 'simulator.mjs'), join(OUTSIDE, `mechanisms/${name}.json`)];
  writeFileSync(
    join(at, 'rig.mjs'),
    `import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
const words = [...${JSON.stringify(simulator)}, ...JSON.parse(readFileSync(${JSON.stringify(join(at, 'switches.json'))}, 'utf8'))];
process.exitCode = spawnSync(process.execPath, words, { stdio: 'inherit' }).status ?? 1;\n`,
  );
  const change = (...switches: readonly string[]) => writeFileSync(join(at, 'switches.json'), JSON.stringify(switches));
  change();
  const plant = `cmd:'${process.execPath}' '${join(at, 'rig.mjs')}'`;
  return { at, change, words: ['tune', name, '--plant', plant, '--profiles', at] };
}

const alive = (pid: number) => {
  try {
    process.kill(pid, 0);
    return readFileSync(`/proc/${pid}/stat`, 'utf8').split(' ')[2] !== 'Z';
  } catch {
    return false;
  }
};

describe('tune', () => {
  test('Ctrl-C in the middle of a trial ends the rig, keeps what was run, leaves the terminal as it was, and the run goes on', async () => {
    const { at, change, words } = rig('outside-hoist');
    const pids = join(at, 'pids');
    change('--hang', '--from-trial', '2', '--pid-file', pids);
    const terminal = open([...words, '--plant-is-simulated']);
    await terminal.shows(/Trial 2 · /);
    while (!existsSync(pids) || readFileSync(pids, 'utf8') === '')
      await new Promise((resolve) => setTimeout(resolve, 10));
    const pid = Number(readFileSync(pids, 'utf8'));
    expect(alive(pid)).toBe(true);
    terminal.write('\u0003');
    expect(await terminal.ended).toBe(130);
    expect(plain(terminal.raw())).toContain('1 trial is kept in run-0001; the same command goes on from there.');
    expect(terminal.raw()).not.toMatch(/\u001b\[\?(25l|1049h)/);
    expect(terminal.buffer()).toBe('normal');
    while (alive(pid)) await new Promise((resolve) => setTimeout(resolve, 10));
    change();
    const resumed = open([...words, '--plant-is-simulated']);
    expect(await resumed.ended).toBe(0);
    expect(plain(resumed.raw())).toContain('Resuming run-0001 after trial 1');
    expect(plain(resumed.raw())).toContain('Target met, after');
  });

  test('Ctrl-C at a checklist ends with 130, and nothing was powered', async () => {
    const { at, change, words } = rig('outside-cart');
    change('--request-file', join(at, 'request.json'));
    const terminal = open(words);
    await terminal.shows(/\[1\/\d+\] /);
    terminal.write('y\r');
    await terminal.shows(/\[2\/\d+\] /);
    terminal.write('\u0003');
    expect(await terminal.ended).toBe(130);
    expect(existsSync(join(at, 'request.json'))).toBe(false);
  });

  test('a person ticks and signs at the terminal, trial by trial', async () => {
    const { at, words } = rig('outside-cart');
    const terminal = open([...words, '--trials', '1']);
    await terminal.shows(/\[1\/\d+\] /);
    const items = Number(/\[1\/(\d+)\]/.exec(terminal.raw())?.[1]);
    for (let item = 1; item <= items; item += 1) {
      await terminal.shows(new RegExp(`\\[${item}/${items}\\] [^\\[]* y\\? `));
      terminal.write('y\r');
    }
    await terminal.shows(/Who ticked\? /);
    terminal.write('Kim\r');
    expect(await terminal.ended).toBe(1);
    const run = JSON.parse(readFileSync(join(at, 'trials/outside-cart/run-0001/run.json'), 'utf8'));
    expect(run.trials[0].signature).toMatchObject({ name: 'Kim' });
    expect(run.trials[0].signature.ticked).toHaveLength(items);
  });
});

describe('without a terminal', () => {
  const run = (words: readonly string[], options: { readonly input?: string } = {}) =>
    spawnSync(process.execPath, [MAIN, ...words], { cwd: folder, env: ENVIRONMENT, encoding: 'utf8', ...options });

  test('the version, the help, and no arguments', () => {
    expect(run(['--version'])).toMatchObject({
      status: 0,
      stdout: `${JSON.parse(readFileSync(join(MAIN, '../../package.json'), 'utf8')).version}\n`,
    });
    expect(run(['--help']).status).toBe(0);
    const bare = run([]);
    expect(bare).toMatchObject({ status: 2, stdout: '' });
    expect(bare.stderr).toContain('Usage: holdfast');
  });

  test('results go to standard output and are plain; failures to standard error with their code', () => {
    const read = run(['read', 'move.csv']);
    expect(read).toMatchObject({ status: 0, stderr: '' });
    expect(read.stdout).not.toContain('\u001b');
    expect(run(['read', 'nothing.csv'])).toMatchObject({ status: 3, stdout: '' });
    expect(JSON.parse(run(['--json', 'read', 'nothing.csv']).stdout)).toMatchObject({
      format: 'holdfast/error@1',
      exit: 3,
    });
    expect(run(['nonsense'])).toMatchObject({ status: 2, stdout: '' });
  });

  test('a reader that goes away ends it quietly', () => {
    const shell = spawnSync('sh', ['-c', `'${process.execPath}' '${MAIN}' demo --profiles none | head -n 1`], {
      cwd: folder,
      env: ENVIRONMENT,
      encoding: 'utf8',
    });
    expect(shell.stderr).toBe('');
    expect(shell.stdout.split('\n')).toHaveLength(2);
  });
});
