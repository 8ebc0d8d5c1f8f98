// Runs every bench in this folder, one after the other: npm run bench
import { spawnSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { basename, join } from 'node:path';

const own = basename(import.meta.filename);
const benches = readdirSync(import.meta.dirname)
  .filter((file) => file.endsWith('.ts') && file !== own)
  .sort();
let failed = 0;
for (const file of benches) {
  console.log(`\n== ${file}`);
  const { status } = spawnSync(process.execPath, ['--import', 'tsx', join(import.meta.dirname, file)], {
    stdio: 'inherit',
  });
  if (status !== 0) failed += 1;
}
if (failed > 0) console.error(`\n${failed} of ${benches.length} benches ended with an error`);
process.exitCode = failed > 0 ? 1 : 0;
