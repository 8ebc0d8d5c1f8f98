// Bundles src/main.ts into dist/, split so that a headless command never loads Ink.
import { chmod, rm } from 'node:fs/promises';
import { build } from 'esbuild';

await rm('dist', { recursive: true, force: true });
await build({
  entryPoints: ['src/main.ts'],
  outdir: 'dist',
  bundle: true,
  splitting: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  minify: true,
  chunkNames: 'part-[hash]',
  legalComments: 'none',
  define: { 'process.env.NODE_ENV': '"production"', 'process.env.DEV': '"false"' },
  alias: { 'react-devtools-core': './empty.mjs' },
  banner: {
    js: "#!/usr/bin/env node\nimport{createRequire as holdfastRequire}from'node:module';const require=holdfastRequire(import.meta.url);",
  },
});
await chmod('dist/main.js', 0o755);
