// A million rows as a stream: memory that does not grow with the file, and MB/s beside a bare pass of the CSV library.
import { createReadStream, createWriteStream, mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { parse } from 'csv-parse';
import { streamMoves } from '../../src/log/stream.ts';

setFlagsFromString('--expose-gc');
const collect: () => void = runInNewContext('gc');

const folder = mkdtempSync(join(tmpdir(), 'holdfast-bench-'));

async function write(rows: number): Promise<string> {
  const path = join(folder, `${rows}.csv`);
  const out = createWriteStream(path);
  out.write('time,setpoint,measured,output\n');
  let at = 0;
  for (let row = 0; row < rows; row++) {
    const setpoint = Math.floor(row / 400) % 2;
    at += 0.03 * (setpoint - at);
    if (!out.write(`${(row * 0.005).toFixed(3)},${setpoint},${at.toFixed(6)},${(setpoint - at).toFixed(4)}\n`)) {
      await new Promise<void>((resolve) => out.once('drain', () => resolve()));
    }
  }
  await new Promise<void>((resolve) => out.end(() => resolve()));
  return path;
}

async function bare(path: string): Promise<number> {
  let rows = 0;
  const parser = createReadStream(path).pipe(
    parse({
      on_record: () => {
        rows++;
        return null;
      },
    }),
  );
  parser.resume();
  await new Promise<void>((resolve) => parser.on('end', () => resolve()));
  return rows;
}

async function streamed(path: string): Promise<{ readonly moves: number; readonly heap: number }> {
  let heap = 0;
  let seen = 0;
  const { moves } = await streamMoves(path, () => {
    if (++seen % 50 !== 0) return;
    collect();
    heap = Math.max(heap, process.memoryUsage().heapUsed + process.memoryUsage().arrayBuffers);
  });
  return { moves, heap: heap / 2 ** 20 };
}

const seconds = async (run: () => Promise<unknown>) => {
  const start = performance.now();
  await run();
  return (performance.now() - start) / 1000;
};

const small = await write(100_000);
const large = await write(1_000_000);
const size = statSync(large).size / 2 ** 20;
await bare(small);
const own: number[] = [];
const other: number[] = [];
for (let round = 0; round < 3; round++) {
  other.push(await seconds(() => bare(large)));
  own.push(await seconds(() => streamed(large)));
}
const best = (values: readonly number[]) => Math.min(...values);
const few = await streamed(small);
const many = await streamed(large);
console.log(
  `1,000,000 rows, ${size.toFixed(0)} MB: read as a stream at ${(size / best(own)).toFixed(1)} MB/s; a bare pass of csv-parse ${(size / best(other)).toFixed(1)} MB/s; ratio ${(best(other) / best(own)).toFixed(2)}`,
);
console.log(
  `memory held while reading: ${few.heap.toFixed(0)} MB at 100,000 rows (${few.moves} moves), ${many.heap.toFixed(0)} MB at 1,000,000 rows (${many.moves} moves)`,
);
rmSync(folder, { recursive: true, force: true });
