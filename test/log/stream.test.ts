import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { readLog } from '../../src/log/read.ts';
import { streamMoves } from '../../src/log/stream.ts';

const folder = mkdtempSync(join(tmpdir(), 'holdfast-stream-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Moves of 400 rows, to and fro. */
function write(rows: number): string {
  const path = join(folder, `${rows}.csv`);
  const lines = ['time,setpoint,measured,output'];
  let at = 0;
  for (let row = 0; row < rows; row++) {
    const setpoint = Math.floor(row / 400) % 2 === 0 ? 1 : 0;
    at += 0.05 * (setpoint - at);
    lines.push(`${(row * 0.005).toFixed(3)},${setpoint},${at.toFixed(6)},${(setpoint - at).toFixed(4)}`);
  }
  writeFileSync(path, lines.join('\n'));
  return path;
}

test('moves are handed over as they end, the same as when the log is read whole', async () => {
  const path = write(40_000);
  const whole = await readLog(path);
  const streamed: { readonly to: number; readonly rows: number }[] = [];
  const summary = await streamMoves(path, ({ to, samples }) => streamed.push({ to, rows: samples.time.length }));
  expect(summary).toMatchObject({ rows: 40_000, moves: 100 });
  expect(streamed).toEqual(whole.moves.map(({ to, samples }) => ({ to, rows: samples.time.length })));
});

test('what is held at once is about one move, however long the log', async () => {
  const lengths: number[] = [];
  // A move that is handed over owns its time column: its size is what the reader kept of the log.
  await streamMoves(write(60_000), ({ samples }) => lengths.push(samples.measured.buffer.byteLength / 8));
  expect(lengths).toHaveLength(150);
  expect(Math.max(...lengths)).toBeLessThan(1_000);
});
