// Starts workers/bench.ts with plain Node: bundled anew each time, since what is measured must be what is there.

import { mkdirSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { build } from 'esbuild';

const root = dirname(dirname(fileURLToPath(import.meta.url)));
const bundle = join(root, '.cache', 'bench', 'bench.mjs');
mkdirSync(dirname(bundle), { recursive: true });
await build({
  absWorkingDir: root,
  entryPoints: ['workers/bench.ts'],
  outfile: bundle,
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  logLevel: 'error',
});
// The bundle starts itself again for each network.
process.argv[1] = bundle;
await import(pathToFileURL(bundle).href);
