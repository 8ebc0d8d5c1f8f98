// How long the built program takes to start, against `node -e 0` on the same machine in the same run: medians of 15
// interleaved starts. Budgets: `--version` within 1.6, `read` of a 250-row log within 2.5. Run: npm run build, then
// npx tsx test/bench/start.ts
import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const ROUNDS = 15;
const folder = mkdtempSync(join(tmpdir(), 'holdfast-start-'));
const log = join(folder, 'move.csv');
const main = join(import.meta.dirname, '../../dist/main.js');

/** A second-order step with ζ = 0.6, 250 rows at 50 Hz, as a team's logger would write it. */
function moveLog(): string {
  const rows = Array.from({ length: 250 }, (_, k) => {
    const t = k * 0.02;
    const damped = 6 * Math.sqrt(1 - 0.36);
    const y = 1 - Math.exp(-3.6 * t) * (Math.cos(damped * t) + (3.6 / damped) * Math.sin(damped * t));
    return `${t.toFixed(2)},1,${y.toFixed(4)},${(1.2 * (1 - y)).toFixed(4)}`;
  });
  return ['time,setpoint,measured,output', ...rows].join('\n');
}

function milliseconds(words: readonly string[]): number {
  const before = process.hrtime.bigint();
  const { status, stderr } = spawnSync(process.execPath, words, { encoding: 'utf8' });
  const taken = Number(process.hrtime.bigint() - before) / 1e6;
  if (status !== 0 && status !== 1) throw new Error(`${words.join(' ')} ended with ${status}: ${stderr}`);
  return taken;
}

const median = (values: readonly number[]) =>
  [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)] ?? Number.NaN;

if (!existsSync(main)) throw new Error('dist/main.js is missing: npm run build');
writeFileSync(log, moveLog());
const WORK = {
  'node -e 0': ['-e', '0'],
  'holdfast --version': [main, '--version'],
  'holdfast --help': [main, '--help'],
  'holdfast read, 250 rows': [main, 'read', log],
};
const taken = new Map<string, number[]>(Object.keys(WORK).map((name) => [name, []]));
for (let round = 0; round < ROUNDS; round += 1) {
  for (const [name, words] of Object.entries(WORK)) taken.get(name)?.push(milliseconds(words));
}
rmSync(folder, { recursive: true });
const bare = median(taken.get('node -e 0') ?? []);
console.log(`Start of the built program, medians of ${ROUNDS} interleaved starts, Node ${process.version}`);
for (const [name, times] of taken) {
  const middle = median(times);
  console.log(`  ${name.padEnd(26)} ${middle.toFixed(0).padStart(5)} ms   ${(middle / bare).toFixed(2)} × node -e 0`);
}
