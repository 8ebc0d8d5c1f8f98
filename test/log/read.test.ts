import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gzipSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { LogError } from '../../src/log/error.ts';
import { PLAIN_READ, type ReadOptions, readLog, readLogBytes } from '../../src/log/read.ts';
import { splitMoves } from '../../src/log/split.ts';
import { writeLog } from '../../src/log/write.ts';
import { samplesOf } from '../fixtures/second-order.ts';

/** Forty rows of one move, 0 to 1, as [time, setpoint, measured, output]. */
const ROWS = Array.from(
  { length: 40 },
  (_, k) =>
    [k * 0.02, 1, Math.round(1e4 * -Math.expm1(-k / 8)) / 1e4, Math.round(1e3 * Math.exp(-k / 8)) / 1e3] as const,
);

const table = (header: string, delimiter: string, format: (value: number) => string = String, end = '\n') =>
  [header, ...ROWS.map((row) => row.map(format).join(delimiter))].join(end) + end;

const read = (text: string | Uint8Array, options: Partial<ReadOptions> = {}) =>
  readLogBytes(typeof text === 'string' ? Buffer.from(text) : text, 'log', { ...PLAIN_READ, ...options });

const plain = 'time,setpoint,measured,output';

async function refusal(text: string | Uint8Array, options: Partial<ReadOptions> = {}): Promise<LogError> {
  try {
    await read(text, options);
  } catch (error) {
    if (error instanceof LogError) return error;
    throw error;
  }
  throw new Error('the log was read');
}

describe('the same move in many layouts', () => {
  const comma = (value: number) => String(value).replace('.', ',');
  const layouts: readonly (readonly [string, string | Uint8Array])[] = [
    ['canonical', table(plain, ',')],
    ['semicolons', table('time;setpoint;measured;output', ';')],
    ['semicolons and decimal commas', table('time;setpoint;measured;output', ';', comma)],
    ['tabs and decimal commas', table('time\tsetpoint\tmeasured\toutput', '\t', comma)],
    ['blanks', table('time setpoint measured output', '   ')],
    ['CRLF', table(plain, ',', String, '\r\n')],
    ['CR alone', table(plain, ',', String, '\r')],
    ['a byte-order mark', `\uFEFF${table(plain, ',')}`],
    ['UTF-16 with its mark', Buffer.from(`\uFEFF${table(plain, ',')}`, 'utf16le')],
    ['quotes', table('"time","setpoint","measured","output"', ',', (value) => `"${value}"`)],
    ['gzip', gzipSync(table(plain, ','))],
    ['a preamble and comments', `Logger 3.1\n# run 7\n\n// pit two\n${table(plain, ',')}`],
    ['a row of units', table(`${plain}\ns,m,m,%`, ',')],
    ['a separator at each line’s end', table(`${plain},`, ',').replace(/(\d)\n/g, '$1,\n')],
    ['other names', table('t,target,actual,duty', ',')],
    ['German names', table('Zeit;Sollwert;Istwert;Stellgröße', ';', comma)],
    [
      'more columns, in another order',
      [
        'temperature,output,position,note,desired,timestamp',
        ...ROWS.map(([t, r, y, u]) => `21.5,${u},${y},ok,${r},${t}`),
      ].join('\n'),
    ],
    [
      'JSON Lines',
      ROWS.map(([t, r, y, u]) => JSON.stringify({ time: t, setpoint: r, measured: y, output: u, extra: null })).join(
        '\n',
      ),
    ],
  ];
  test.each(layouts)('%s', async (_, text) => {
    const { samples, rows, moves } = await read(text);
    expect(rows).toBe(40);
    expect(samples.time[39]).toBeCloseTo(0.78, 9);
    expect([...samples.measured].map((value) => Number(value.toFixed(4)))).toEqual(ROWS.map(([, , y]) => y));
    expect(samples.output?.[3]).toBeCloseTo(ROWS[3]?.[3] ?? 0, 9);
    expect(moves).toHaveLength(1);
    expect(moves[0]).toMatchObject({ from: 0, to: 1, start: 0, end: 40 });
  });

  test('columns without a header are taken by number', async () => {
    const text = ROWS.map((row) => row.join(',')).join('\n');
    const { samples } = await read(text, { columns: { time: '1', setpoint: '2', measured: '3', output: '4' } });
    expect(samples.measured).toHaveLength(40);
  });
});

describe('units', () => {
  test('come from headers and are brought into the profile’s', async () => {
    const text = [
      'Time [ms],target [mm],pos [mm],output %',
      ...ROWS.map(([t, r, y, u]) => `${1000 * t},${1000 * r},${1000 * y},${100 * u}`),
    ].join('\n');
    const { samples, columns } = await read(text, { unit: 'm', outputUnit: 'fraction', quantity: 'position' });
    expect(samples.time[10]).toBeCloseTo(0.2, 9);
    expect(samples.measured[10]).toBeCloseTo(ROWS[10]?.[2] ?? 0, 9);
    expect(samples.output?.[0]).toBeCloseTo(1, 9);
    expect(columns.measured).toMatchObject({ header: 'pos [mm]', unit: 'mm', scale: 0.001, how: 'guessed' });
  });

  test('time without a unit is recognised by its spacing, and that is said', async () => {
    for (const factor of [1e3, 1e6]) {
      const text = [plain, ...ROWS.map(([t, r, y, u]) => `${Math.round(factor * t) + 5e6},${r},${y},${u}`)].join('\n');
      const { samples, warnings } = await read(text);
      expect(samples.time[39]).toBeCloseTo(0.78, 6);
      expect(warnings.join(' ')).toMatch(/names no unit/);
    }
  });

  test('that do not measure the same thing are refused', async () => {
    const error = await refusal(table('time,setpoint [deg],measured [deg],output', ','), { unit: 'm' });
    expect(error.fault).toBe('unit');
    expect(error.message).toMatch(/do not measure the same thing/);
    expect((await refusal(table('time,setpoint,measured,output [V]', ','), { outputUnit: 'fraction' })).fault).toBe(
      'unit',
    );
  });
});

describe('a log that cannot be used is refused with its line and a remedy', () => {
  const row = (k: number, text: string) =>
    table(plain, ',')
      .split('\n')
      .map((line, at) => (at === k ? text : line))
      .join('\n');
  test.each<readonly [string, string | Uint8Array, string, number | null]>([
    ['empty', '', 'empty', null],
    ['only blank lines', '\n\n', 'empty', null],
    ['a header and no rows', `${plain}\n`, 'no-rows', 1],
    ['one row', `${plain}\n0,1,0,1\n`, 'no-rows', null],
    ['prose', 'the quick brown fox\njumps over\n', 'no-rows', 1],
    ['null bytes', Buffer.from([116, 0, 1, 2, 3, 0, 9, 10]), 'binary', null],
    ['half a gzip', gzipSync(table(plain, ',').repeat(40)).subarray(0, 300), 'truncated', null],
    ['text in a number', row(20, '0.38,1,oops,0.1'), 'not-a-number', 21],
    ['NaN', row(20, '0.38,1,NaN,0.1'), 'not-a-number', 21],
    ['infinity', row(20, '0.38,1,inf,0.1'), 'not-a-number', 21],
    ['an empty cell', row(20, '0.38,1,,0.1'), 'not-a-number', 21],
    ['a hexadecimal', row(20, '0.38,1,0x1f,0.1'), 'not-a-number', 21],
    ['a number with a tail', row(20, '0.38,1,12abc,0.1'), 'not-a-number', 21],
    ['a short row', row(20, '0.38,1'), 'ragged', 21],
    ['time that goes back', row(20, '0.1,1,0.5,0.1'), 'time-goes-back', 21],
    [
      'no setpoint',
      ['time,measured,output', ...ROWS.map(([t, , y, u]) => `${t},${y},${u}`)].join('\n'),
      'no-setpoint',
      null,
    ],
  ])('%s', async (_, text, fault, line) => {
    const error = await refusal(text);
    expect(error.fault).toBe(fault);
    expect(error.line).toBe(line);
    expect(error.remedy).not.toBe('');
    expect(error.message).not.toMatch(/[\u0000-\u001f]/);
  });

  test('a column that was named and is not there, with those that are', async () => {
    const error = await refusal(table(plain, ','), { columns: { measured: 'height' } });
    expect(error.message).toBe('it has no column "height".');
    expect(error.remedy).toBe('Its columns are: time, setpoint, measured, output.');
  });

  test('a missing file and a folder', async () => {
    await expect(readLog('/nowhere/at/all.csv')).rejects.toMatchObject({ fault: 'cannot-open' });
    await expect(readLog('/tmp')).rejects.toMatchObject({ fault: 'cannot-open' });
  });

  test('an endless line does not fill the memory', async () => {
    expect((await refusal(`${plain}\n${'1'.repeat(1 << 21)}`)).fault).toMatch(/too-long|no-rows|not-a-number/);
  });

  test('names with escape sequences are shown harmless', async () => {
    const error = await refusal(table('\u001b[31mtime,a\u0007b,c,d', ','));
    expect(`${error.message}${error.remedy}`).not.toMatch(/[\u0000-\u001f]/);
  });
});

describe('repairs only when asked', () => {
  test('rows that go back or hold no number are dropped and counted', async () => {
    const lines = table(plain, ',').trim().split('\n');
    lines[10] = '0.05,1,0.5,0.1';
    lines[15] = '0.28,1,NaN,0.1';
    const { rows, repairs } = await read(lines.join('\n'), { rows: 'repaired' });
    expect(rows).toBe(38);
    expect(repairs).toEqual([
      'Dropped 1 row that went back in time.',
      'Dropped 1 row without a number in every needed column.',
    ]);
  });

  test('a last row that was cut off is left out, and repeats are merged, with a word', async () => {
    const lines = table(plain, ',').trim().split('\n');
    lines[12] = lines[11] ?? '';
    const { rows, warnings } = await read(`${lines.join('\n')}\n0.8,1`);
    expect(rows).toBe(39);
    expect(warnings.join(' ')).toMatch(/repeats the time/);
    expect(warnings.join(' ')).toMatch(/cut off/);
  });
});

describe('moves', () => {
  const log = (setpoint: (t: number) => number, duration: number, enabled?: (t: number) => number) => {
    const time = Array.from({ length: Math.round(duration / 0.02) }, (_, k) => k * 0.02);
    let at = 0;
    const measured = time.map((t) => {
      at += 0.2 * (setpoint(t) - at);
      return at;
    });
    return {
      ...samplesOf({ time, measured, setpoint: time.map(setpoint) }),
      enabled: enabled ? Float64Array.from(time, enabled) : null,
    };
  };

  test('steps of the setpoint part a log', () => {
    const moves = splitMoves(log((t) => (t < 1 ? 0 : t < 3 ? 1 : t < 5 ? 0.2 : 0.8), 7));
    expect(moves.map(({ from, to }) => [from, to])).toEqual([
      [0, 1],
      [1, 0.2],
      [0.2, 0.8],
    ]);
    expect(moves[0]?.samples.time[0]).toBe(0);
    expect(moves[0]?.shaped).toBe(false);
  });

  test('a ramp is one shaped move', () => {
    const moves = splitMoves(log((t) => Math.min(1, Math.max(0, t - 0.5)), 3));
    expect(moves).toHaveLength(1);
    expect(moves[0]).toMatchObject({ to: 1, shaped: true });
  });

  test('a disabled stretch parts, and is not a move', () => {
    const moves = splitMoves(
      log(
        (t) => (t < 2 ? 1 : 0.3),
        6,
        (t) => (t < 1.5 || t > 2.5 ? 1 : 0),
      ),
    );
    expect(moves).toHaveLength(2);
  });
});

describe('writing', () => {
  test('reads back to the same doubles', async () => {
    const number = fc.double({ noNaN: true, noDefaultInfinity: true });
    await fc.assert(
      fc.asyncProperty(fc.array(fc.tuple(number, number), { minLength: 3, maxLength: 30 }), async (pairs) => {
        const samples = samplesOf({
          time: pairs.map((_, k) => k * 0.02),
          measured: pairs.map(([y]) => y),
          setpoint: 1,
          output: pairs.map(([, u]) => u),
        });
        const back = await read(writeLog(samples));
        expect([...back.samples.measured]).toEqual([...samples.measured]);
        expect([...(back.samples.output ?? [])]).toEqual([...(samples.output ?? [])]);
      }),
      { numRuns: 60 },
    );
  });

  test('has the canonical header and RFC 4180 line ends', () => {
    const text = writeLog(samplesOf({ time: [0, 0.1], measured: [0, 1e-7], setpoint: 1, output: [1, 0] }));
    expect(text).toBe('time,setpoint,measured,output\r\n0,1,0,1\r\n0.1,1,1e-7,0\r\n');
  });
});

const folder = fileURLToPath(new URL('../../../shared/data/', import.meta.url));
const there = existsSync(folder);
if (!there) console.info('skipped: the measured records of ../shared/data are not here');

describe.skipIf(!there)('measured records', () => {
  test.each([
    ['servo_step_closed_50hz.csv', 126, 1],
    ['servo_profile_closed_50hz.csv', 151, 2],
    ['servo_speed_stairs_closed_50hz.csv', 450, 6],
    ['gearmotor_step_run1_100hz.csv', 1427, 1],
    ['wheel_speed_p_30hz.csv', 2291, 27],
    ['as_published/glitch_ms_stamps.csv', 1174, 1],
  ])('%s: %i rows, %i moves', async (file, rows, moves) => {
    const reading = await readLog(folder + file);
    expect(reading.rows).toBe(rows);
    expect(reading.moves).toHaveLength(moves);
  });

  test('three header lines and several motors: it asks which, and reads what it is told', async () => {
    const file = `${folder}as_published/three_header_lines_semicolon.csv`;
    await expect(readLog(file)).rejects.toMatchObject({ fault: 'no-column' });
    const reading = await readLog(file, { ...PLAIN_READ, columns: { measured: 'm1vel', setpoint: 'm1setvel' } });
    expect(reading.rows).toBeGreaterThan(2000);
  });
});
