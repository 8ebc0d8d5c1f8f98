import { expect, test } from 'vitest';
import { courseDuration, planSetpoint, setpointAt, setpointSpeedAt } from '../../src/trial/setpoint.ts';

test.each([
  // Closed form D/v + v/a, or 2·√(D/a) when the top speed is not reached.
  [3, 1.5, 2, 2.75, 1.5],
  [0.5, 1.5, 2, 1.0, 1.0],
  [2, 1, 2, 2.5, 1],
  [0.3, 1, 2, 2 * Math.sqrt(0.15), Math.sqrt(0.6)], // 0.774597 both,
  [0.5, 1, 2, 1.0, 1],
])('%f at %f and %f takes %f s and reaches %f', (distance, speed, acceleration, duration, top) => {
  for (const way of [1, -1]) {
    const course = planSetpoint({ from: 1, to: 1 + way * distance }, { speed, acceleration });
    expect(courseDuration(course)).toBeCloseTo(duration, 6);
    expect(setpointSpeedAt(course, duration / 2)).toBeCloseTo(way * top, 6);
    expect(setpointAt(course, 0)).toBe(1);
    expect(setpointAt(course, duration / 2)).toBeCloseTo(1 + (way * distance) / 2, 6);
    expect(setpointAt(course, duration + 1)).toBe(1 + way * distance);
    // Its speed is the slope of its course, and never more than the top.
    for (let t = 0.01; t < duration; t += duration / 37) {
      const slope = (setpointAt(course, t + 1e-6) - setpointAt(course, t - 1e-6)) / 2e-6;
      expect(setpointSpeedAt(course, t)).toBeCloseTo(slope, 4);
    }
  }
});

test('a step is at its end from the start, and has no speed', () => {
  const course = planSetpoint({ from: 0, to: 2 }, null);
  expect([setpointAt(course, 0), setpointSpeedAt(course, 0), courseDuration(course)]).toEqual([2, 0, 0]);
});

test('a shape without speed or acceleration is refused', () => {
  expect(() => planSetpoint({ from: 0, to: 1 }, { speed: 0, acceleration: 1 })).toThrow(RangeError);
  expect(() => planSetpoint({ from: 0, to: 1 }, { speed: 1, acceleration: -1 })).toThrow(RangeError);
});
