import { gzipSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { holdfast, holdfastJson, snapshotOf, temporaryFolder } from './harness.ts';
import { CANONICAL, csv, put, secondOrderRows } from './logs.ts';
import { errorResult, readResult } from './shapes.ts';

const cwd = temporaryFolder();
const ringing = secondOrderRows(0.5, 5, 4);
const good = csv(CANONICAL, ringing);
put(cwd, 'ringing.csv', good);

describe('a log that reads', () => {
  test('figures of a second-order step are those of the closed form', async () => {
    const { code, document } = await holdfastJson(['read', 'ringing.csv'], { cwd });
    const result = readResult.parse(document);
    expect(code).toBe(0);
    expect(result).toMatchObject({ file: 'ringing.csv', rows: 401, repairs: [] });
    expect(result.duration).toBeCloseTo(4, 9);
    expect(result.moves).toHaveLength(1);
    const figures = result.moves[0]?.figures;
    // ζ = 0.5: 100·exp(−πζ/√(1−ζ²)) = 16.303 %; with ωn = 1 rise 10–90 takes 1.6376 s and settling to 2 % 8.0764 s (closed forms,
    // recomputed in the design's checks).
    expect(figures?.overshoot).toBeCloseTo(16.3, 1);
    expect(figures?.riseTime).toBeCloseTo(1.6376 / 5, 2);
    expect(figures?.settlingTime).toBeCloseTo(8.0764 / 5, 2);
  });

  test('the page says the answer first, draws a time axis with units, tolerance and a legend', async () => {
    const { code, out, err } = await holdfast(['read', 'ringing.csv'], { cwd });
    expect(code).toBe(0);
    expect(err).toBe('');
    const lines = out.split('\n');
    expect(lines[0]).toMatch(/^ringing\.csv: Ran .* past the target/);
    expect(out).toContain('measured against setpoint [units]');
    expect(out).toMatch(/ 4\.0? s$|3\.\d +s$/m);
    expect(out).toMatch(/tolerance .* setpoint .* measured/);
    expect(out).toContain('overshoots:');
    for (const line of lines) expect(line.length).toBeLessThanOrEqual(80);
  });

  test('with --ascii the page is plain ASCII', async () => {
    const { out } = await holdfast(['read', 'ringing.csv', '--ascii'], { cwd });
    expect(out).toMatch(/^[\n\u0020-\u007e]+$/);
  });

  test('against a profile it says what the target asks, and 1 when it is missed', async () => {
    const { code, out } = await holdfast(['read', 'ringing.csv', '--profile', 'lift', '--profiles', cwd], { cwd });
    expect(code).toBe(1);
    expect(out).toMatch(/overshoot +16 % +at most \d+ % +MISSED/);
  });

  test('guessed columns are shown and can be overruled, units and all', async () => {
    const rows = ringing.map(([t = 0, r = 0, y = 0, u = 0]) => [1000 * t, 7, 100 * r, 100 * y, 100 * u]);
    put(cwd, 'named.csv', csv('Time (ms),Position [mm],goal,where,duty %', rows));
    const guessed = await holdfast(['read', 'named.csv'], { cwd });
    expect(guessed.out.replaceAll(/\s+/g, ' ')).toContain('measured ← "Position [mm]"');
    expect(guessed.code).toBe(1);
    const told = await holdfastJson(
      ['read', 'named.csv', '--column', 'measured=where', '--column', 'setpoint=goal', '--unit', 'mm'],
      { cwd },
    );
    const { columns, moves } = readResult.parse(told.document);
    expect(columns.time).toEqual({ header: 'Time (ms)', unit: 'ms', scale: 0.001 });
    expect(columns.measured.header).toBe('where');
    expect(moves[0]?.figures.overshoot).toBeCloseTo(16.3, 1);
  });

  test('a log can be piped in', async () => {
    const { code, document } = await holdfastJson(['read', '-'], { cwd, piped: good });
    expect(code).toBe(0);
    expect(readResult.parse(document)).toMatchObject({ file: 'standard input', rows: 401 });
  });

  test('a log of many moves is listed, and each can be drawn', async () => {
    const many = Array.from({ length: 7 }, (_, move) =>
      ringing
        .slice(0, 100)
        .map(([t = 0, , y = 0]) => [move + t, move % 2 === 0 ? 1 : 0, move % 2 === 0 ? y : 1 - y, 0]),
    ).flat();
    put(cwd, 'many.csv', csv(CANONICAL, many));
    const listed = await holdfast(['read', 'many.csv'], { cwd });
    expect(listed.out).toMatch(/^many\.csv: \d of 7 moves settled/);
    expect(listed.out).toContain('Show one with --move N.');
    const one = await holdfast(['read', 'many.csv', '--move', '3'], { cwd });
    expect(one.out).toContain('Move 3 · ');
    expect(one.out).not.toContain('Move 4 · ');
    expect((await holdfast(['read', 'many.csv', '--move', '8'], { cwd })).code).toBe(2);
  });
});

const at = (row: number, change: (cells: (string | number)[]) => (string | number)[]) =>
  csv(
    CANONICAL,
    ringing.map((cells, k) => (k === row ? change([...cells]) : cells)),
  );
const still = csv(
  CANONICAL,
  ringing.map(([t = 0]) => [t, 1, 1, 0]),
);

interface Bad {
  readonly name: string;
  readonly content: string | Uint8Array | null;
  readonly says: string;
  readonly line?: number;
  readonly words?: readonly string[];
}

const BAD: readonly Bad[] = [
  { name: 'missing.csv', content: null, says: 'no such file' },
  { name: 'empty.csv', content: '', says: 'empty' },
  { name: 'blank.csv', content: '\n\n  \n', says: 'empty' },
  { name: 'header.csv', content: `${CANONICAL}\n`, says: 'no rows', line: 1 },
  { name: 'binary.csv', content: Uint8Array.from({ length: 900 }, (_, k) => (k * 73) % 256), says: 'not text' },
  { name: 'cut.csv.gz', content: gzipSync(good).subarray(0, 400), says: 'cut off' },
  { name: 'nan.csv', content: at(41, ([t = 0, r = 0]) => [t, r, 'NaN', 0]), says: 'NaN', line: 43 },
  { name: 'word.csv', content: at(20, ([t = 0, r = 0]) => [t, r, 'oops', 0]), says: 'oops', line: 22 },
  { name: 'back.csv', content: at(120, ([, r = 0, y = 0]) => [0.5, r, y, 0]), says: 'back', line: 122 },
  { name: 'strangers.csv', content: good.replace(CANONICAL, 'alpha,beta,gamma,delta'), says: '--column time=HEADER' },
  { name: 'no-setpoint.csv', content: good.replace('setpoint', 'beta'), says: '--column setpoint=HEADER' },
  { name: 'still.csv', content: still, says: 'no move' },
  { name: 'prose.csv', content: 'Dear diary,\ntoday the lift rang again.\n', says: 'no rows of numbers' },
  { name: 'column.csv', content: good, says: 'no column "height"', words: ['--column', 'measured=height'] },
  {
    name: 'degrees.csv',
    content: good.replace('measured', 'measured [deg]'),
    says: 'do not measure the same thing',
    words: ['--profile', 'lift', '--profiles', cwd],
  },
];

describe('a log that cannot be used is refused with 3: what, where, what to do', () => {
  test.each(BAD)('$name', async ({ name, content, says, line, words = [] }) => {
    if (content !== null) put(cwd, name, content);
    const before = snapshotOf(cwd);
    const { code, out, err } = await holdfast(['read', name, ...words], { cwd });
    expect(code).toBe(3);
    expect(out).toBe('');
    expect(err).toContain(name);
    expect(err).toContain(says);
    expect(err).not.toContain('    at ');
    const json = await holdfastJson(['read', name, ...words], { cwd });
    const document = errorResult.parse(json.document);
    expect(document).toMatchObject({ exit: 3, where: { file: name } });
    if (line !== undefined) expect(document.where.line).toBe(line);
    expect(snapshotOf(cwd)).toEqual(before);
  });

  test('--repair drops what cannot be used, and says how much', async () => {
    for (const name of ['nan.csv', 'back.csv']) {
      const { code, document } = await holdfastJson(['read', name, '--repair'], { cwd });
      expect(code).toBe(0);
      expect(readResult.parse(document).repairs.join()).toContain('Dropped 1 row');
    }
  });

  test('rows that come unevenly are read, and said to be uneven', async () => {
    const uneven = ringing.filter((_, k) => k % 7 !== 3 && k % 11 !== 5);
    put(cwd, 'uneven.csv', csv(CANONICAL, uneven));
    const { code, document } = await holdfastJson(['read', 'uneven.csv'], { cwd });
    expect(code).toBe(0);
    expect(readResult.parse(document).moves[0]?.verdict.map(({ is }) => is)).toContain('uneven-ticks');
  });
});
