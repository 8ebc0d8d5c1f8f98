import { describe, expect, test } from 'vitest';
import { tickLabel, tickStep, ticks, timeAxis } from '../../src/chart/axis.ts';
import { resample, valueAt } from '../../src/chart/resample.ts';

describe('ticks', () => {
  test('steps are 1, 2 or 5 times a power of ten, whatever the range', () => {
    for (let range = 1.3e-7; range < 1e9; range *= 1.7) {
      const step = tickStep(range, 5);
      const lead = step / 10 ** Math.floor(Math.log10(step * (1 + 1e-12)));
      expect([1, 2, 5].some((round) => Math.abs(lead - round) < 1e-9)).toBe(true);
      expect(range / step).toBeGreaterThan(2.4);
      expect(range / step).toBeLessThan(10);
    }
  });

  test('labels have the decimals of their step and no minus before a nought', () => {
    expect(tickLabel(0.30000000000000004, 0.1)).toBe('0.3');
    expect(tickLabel(-1e-18, 0.05)).toBe('0.00');
    expect(tickLabel(1200, 200)).toBe('1200');
    expect(tickLabel(2e7, 5e6)).toBe('2e7');
  });

  test('an axis of rounding noise ends', () => {
    expect(ticks(1e18, 1e18 + 4, 1).length).toBeLessThan(300);
  });

  test('each label of the time axis stands under its tick', () => {
    const [rule, labels] = timeAxis(0, 2, 81, 3, false);
    expect(labels.trimEnd()).toMatch(/s$/);
    const columns = [...rule.slice(4)].map((glyph, k) => (glyph === '+' ? k : -1)).filter((k) => k >= 0);
    // 81 columns over 2 s: 40 columns a second, a tick every 0.2 s or 0.5 s.
    const step = (columns[1] ?? 0) - (columns[0] ?? 0);
    expect([8, 20]).toContain(step);
    expect(columns).toEqual(Array.from({ length: 80 / step + 1 }, (_, k) => k * step));
    expect(labels.slice(4 + 40 - 1, 4 + 40 + 2)).toBe('1.0');
  });
});

describe('resampling', () => {
  const time = Float64Array.from({ length: 1000 }, (_, k) => k / 999);

  test('least and most of every column are those of its samples', () => {
    const value = time.map((t) => Math.sin(400 * t) * t);
    const { low, high } = resample(time, value, [0, 1], 37);
    const width = 1 / 36;
    for (let column = 0; column < 37; column++) {
      const inside = [...value].filter((_, row) => Math.abs((time[row] ?? 0) - column * width) < width / 2 - 1e-9);
      expect(low[column]).toBeLessThanOrEqual(Math.min(...inside));
      expect(high[column]).toBeGreaterThanOrEqual(Math.max(...inside));
    }
  });

  test('fewer samples than columns are interpolated, and nothing is made up before the first or after the last', () => {
    const { value } = resample(Float64Array.of(1, 2), Float64Array.of(10, 20), [0, 3], 7);
    expect(value.slice(2, 5)).toEqual([10, 15, 20]);
    expect(value.filter(Number.isNaN)).toHaveLength(4);
  });

  test('a value is read between its samples, and not across a gap', () => {
    const t = Float64Array.of(0, 1, 2, 3);
    const v = Float64Array.of(0, 4, Number.NaN, 8);
    expect(valueAt(t, v, 0.25)).toBe(1);
    expect(valueAt(t, v, 1)).toBe(4);
    expect(valueAt(t, v, 1.5)).toBeNaN();
    expect(valueAt(t, v, 3)).toBe(8);
    expect(valueAt(t, v, 3.1)).toBeNaN();
  });
});
