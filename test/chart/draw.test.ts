import fc from 'fast-check';
import stringWidth from 'string-width';
import stripAnsi from 'strip-ansi';
import { describe, expect, test } from 'vitest';
import { drawChart, LEAST_HEIGHT, LEAST_WIDTH, stackCharts } from '../../src/chart/draw.ts';
import type { Line } from '../../src/chart/spec.ts';
import { outputChart } from '../../src/chart/trial-chart.ts';
import { COLOUR, line, MONO, madeChart, madeTrial, PLAIN, seconds, spec } from './made.ts';

/** Rows of the plot alone: label, edge and cells of each. */
function plot(rows: readonly string[], edge: string): readonly { label: string; cells: string }[] {
  return rows
    .filter((row) => /^\s*[-\d.e]*$/.test(row.split(edge)[0] ?? '') && row.includes(edge))
    .map((row) => ({ label: (row.split(edge)[0] ?? '').trim(), cells: row.slice(row.indexOf(edge) + 1) }));
}

describe('size', () => {
  const anyNumber = fc.oneof(
    fc.double({ noDefaultInfinity: true, noNaN: true, min: -1e12, max: 1e12 }),
    fc.constantFrom(Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY, 0, 1e300, -1e300, 1e-300),
  );
  const roles: readonly Line['role'][] = [
    'measured',
    'setpoint',
    'band',
    'tolerance',
    'p',
    'i',
    'd',
    'other',
    'promise',
  ];
  const anyLine = fc
    .record({
      role: fc.constantFrom(...roles),
      values: fc.array(anyNumber, { maxLength: 60 }),
      step: fc.constantFrom(0.001, 0.02, 5),
    })
    .map(({ role, values, step }) => line(role, seconds(values.length, step), values));

  test('whatever it is given, a chart keeps to its width and height, and to ASCII and no colour where asked', () => {
    fc.assert(
      fc.property(
        fc.array(anyLine, { maxLength: 6 }),
        fc.integer({ min: 1, max: 130 }),
        fc.integer({ min: 1, max: 45 }),
        fc.option(fc.double({ min: -1, max: 4, noNaN: true })),
        fc.constantFrom(PLAIN, MONO, COLOUR),
        (lines, width, height, cursor, style) => {
          const rows = drawChart(spec(lines, { width, height, cursor }), style);
          expect(rows.length).toBeLessThanOrEqual(Math.max(height, LEAST_HEIGHT));
          for (const row of rows) {
            expect(stringWidth(row)).toBeLessThanOrEqual(Math.max(width, LEAST_WIDTH));
            if (!style.colour) expect(row).not.toContain('\u001b');
            if (!style.unicode) expect(row).toMatch(/^[\x20-\x7e]*$/);
            if (style.colour) expect(stripAnsi(row)).not.toContain('\u001b');
          }
        },
      ),
      { numRuns: 150, seed: 7 },
    );
  });

  test('a chart fills the height it is given', () => {
    for (const height of [8, 15, 24, 40]) expect(drawChart(madeChart(80, height), MONO)).toHaveLength(height);
  });

  test('a title in characters two columns wide is cut to the width', () => {
    const rows = drawChart(
      spec([line('measured', [0, 1], [0, 1])], { title: '昇降機の位置'.repeat(12), width: 40 }),
      MONO,
    );
    expect(stringWidth(rows[0] ?? '')).toBeLessThanOrEqual(40);
    expect(rows[0]).toMatch(/…$/);
  });

  test('colour is only dress: without it the same characters are drawn', () => {
    const chart = { ...madeChart(80, 20), cursor: 0.5 };
    expect(drawChart(chart, COLOUR).map((row) => stripAnsi(row).trimEnd())).toEqual(
      drawChart(chart, MONO).map((row) => row.trimEnd()),
    );
  });
});

describe('truth', () => {
  test('a level line lies on the row that carries its value', () => {
    for (const value of [0.2, 0.4, 0.8]) {
      const chart = spec([line('measured', seconds(100), Array<number>(100).fill(value))], {
        range: [0, 1],
        height: 17,
      });
      const rows = plot(drawChart(chart, MONO), '┤');
      const drawn = rows.filter(({ cells }) => cells.includes('─'));
      expect(drawn.map(({ label }) => label)).toEqual([value.toFixed(1)]);
    }
  });

  test('a ramp from corner to corner goes through the middle, in the row and in the column', () => {
    const chart = spec([line('setpoint', seconds(201, 0.01), seconds(201, 0.005))], {
      range: [0, 1],
      width: 60,
      height: 17,
    });
    const rows = plot(drawChart(chart, MONO), '┤');
    const columns = 60 - 4 - 2;
    const middle = rows[(rows.length - 1) / 2]?.cells ?? '';
    const at = [...middle].map((glyph, k) => (glyph === '═' ? k : -1)).filter((k) => k >= 0);
    expect(at.reduce((sum, k) => sum + k, 0) / at.length).toBeCloseTo((columns - 1) / 2, 0);
  });

  test('a spike of one sample in 5000 is drawn at its full height', () => {
    const value = Array<number>(5000).fill(0);
    value[3217] = 1;
    const rows = plot(drawChart(spec([line('measured', seconds(5000, 0.001), value)], { width: 50 }), MONO), '┤');
    expect(rows.find(({ label }) => label === '1.0')?.cells).toMatch(/\S/);
  });

  test('two spikes in one column, one up and one down, are both drawn', () => {
    const value = Array<number>(5000).fill(0);
    value[3217] = 1;
    value[3220] = -1;
    const chart = spec([line('measured', seconds(5000, 0.001), value)], { width: 50, range: [-1, 1] });
    const rows = plot(drawChart(chart, MONO), '┤');
    expect(rows[0]?.cells).toMatch(/\S/);
    expect(rows.at(-1)?.cells).toMatch(/\S/);
  });

  test('a swing faster than the columns shows both its extremes', () => {
    const value = seconds(6000, 0.001).map((t) => Math.sin(2 * Math.PI * 100 * t));
    const rows = plot(drawChart(spec([line('measured', seconds(6000, 0.001), value)], { range: [-1, 1] }), MONO), '┤');
    for (const end of [rows[0], rows.at(-1)]) expect((end?.cells.match(/\S/g) ?? []).length).toBeGreaterThan(40);
  });

  test('a gap in the samples is a gap in the line', () => {
    const value = seconds(100).map((t) => (t > 0.7 && t < 1.3 ? Number.NaN : 0.5));
    const rows = plot(drawChart(spec([line('measured', seconds(100), value)], { range: [0, 1] }), MONO), '┤');
    const cells = rows.find(({ cells }) => cells.includes('─'))?.cells ?? '';
    expect(cells).toMatch(/^─{15,22} {14,20}─{15,22}$/);
  });

  test('values beyond the range lie on its edge', () => {
    const rows = plot(
      drawChart(spec([line('p', seconds(50), Array<number>(50).fill(9))], { range: [-1, 1] }), PLAIN),
      '|',
    );
    expect(rows[0]?.cells).toMatch(/^p+$/);
  });

  test('a band is shaded from its low to its high edge and nowhere else', () => {
    const time = seconds(50);
    const band = [line('band', time, Array<number>(50).fill(0.25)), line('band', time, Array<number>(50).fill(0.75))];
    const rows = plot(drawChart(spec(band, { range: [0, 1], height: 13 }), MONO), '┤');
    const shaded = rows.map(({ cells }) => cells.includes('░'));
    expect(shaded).toEqual([false, false, true, true, true, true, true, false, false]);
  });

  test('one sample and no sample are drawn, too', () => {
    expect(drawChart(spec([line('measured', [0], [3])]), MONO).join('\n')).toContain('─');
    expect(drawChart(spec([line('measured', [], [])]), MONO)).toHaveLength(16);
    expect(drawChart(spec([]), MONO)).toHaveLength(16);
  });

  test('huge and tiny values keep short labels that read back to the values', () => {
    for (const size of [1e-12, 1e9, 3e30]) {
      const rows = plot(drawChart(spec([line('setpoint', [0, 1, 2], [0, size, size])]), PLAIN), '|');
      const labels = rows.map(({ label }) => label).filter((label) => label !== '');
      expect(Math.max(...labels.map((label) => label.length))).toBeLessThanOrEqual(8);
      expect(Math.max(...labels.map(Number)) / size).toBeCloseTo(1, 9);
    }
  });
});

describe('telling lines apart', () => {
  test('without colour and in ASCII every line of a trial and of its output has a glyph of its own, named in the legend', () => {
    const { samples } = madeTrial();
    const output = outputChart(samples, { unit: 'of full', width: 80, height: 14, span: null });
    if (output === null) throw new Error('the made trial has an output');
    for (const chart of [madeChart(80, 20), output]) {
      const names = [...new Set(chart.lines.map(({ name }) => name))];
      const legend = drawChart(chart, PLAIN).filter((row) => names.some((name) => row.includes(name)));
      const glyphs = names.map((name) => legend.join(' ').match(new RegExp(`(\\S)\\1 ${name}`))?.[1]);
      expect(glyphs).not.toContain(undefined);
      expect(new Set(glyphs).size).toBe(names.length);
    }
  });
});

describe('cursor and stacking', () => {
  test('a cursor reads every line at its time, between samples, too', () => {
    const chart = spec([line('setpoint', [0, 1], [0, 4], 'setpoint'), line('measured', [0, 1], [0, 1], 'measured')], {
      cursor: 0.25,
      width: 80,
    });
    expect(drawChart(chart, PLAIN).join('\n')).toMatch(/at 0\.25 s {3}measured 0\.25\d* {3}setpoint 1\.0+ m/);
  });

  test('stacked charts share one span, also where one log is shorter', () => {
    const flat = (role: Line['role'], count: number) => line(role, seconds(count, 0.02), Array<number>(count).fill(1));
    const half = spec([flat('setpoint', 51)], { height: 10, range: [0, 2] });
    const whole = spec([flat('other', 101)], { height: 10, range: [0, 2] });
    for (const [upper, lower] of [[half, whole] as const, [whole, half] as const]) {
      const rows = stackCharts(upper, lower, PLAIN).filter((row) => row.includes('|'));
      const drawn = (glyph: string) => rows.join('\n').split(glyph).length - 1;
      expect(drawn('=') / drawn('o')).toBeCloseTo(0.5, 1);
    }
  });

  test('stacked charts show a moment in the same column', () => {
    const time = seconds(101, 0.02);
    const step = time.map((t) => (t < 1.2 ? 0 : 1));
    const upper = spec(
      [
        line(
          'setpoint',
          time,
          step.map((v) => 1000 * v),
        ),
      ],
      { height: 12 },
    );
    const lower = spec([line('other', time, step)], { height: 12 });
    const rows = stackCharts(upper, lower, PLAIN);
    expect(rows).toHaveLength(24);
    const first = (glyph: string) =>
      Math.min(...rows.map((row) => row.indexOf(glyph.repeat(6))).filter((at) => at >= 0));
    const ends = rows.filter((row) => row.includes('|'));
    const rise = (glyph: string) => ends.find((row) => row.includes(glyph))?.indexOf(glyph);
    expect(rise('=')).toBe(rise('o'));
    expect(first('=')).toBeGreaterThan(0);
    expect(rows.filter((row) => /\ds?$/.test(row) && row.includes(' s'))).toHaveLength(0);
    expect(rows.filter((row) => row.trimEnd().endsWith(' s'))).toHaveLength(1);
  });
});
