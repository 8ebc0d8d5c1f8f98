// Arguments to command or console; nothing else. The version is answered before anything is loaded.
import { VERSION } from './command/version.ts';

const words = process.argv.slice(2);

if (words.length === 1 && (words[0] === '--version' || words[0] === '-V')) {
  process.stdout.write(`${VERSION}\n`);
} else {
  const { start } = await import('./command/start.ts');
  process.exitCode = await start(words, async () => {
    process.stderr.write('The console is not built yet. holdfast --help lists the commands.\n');
    return 2;
  });
}
