/**
 * The beginning of every command: `node server/local/setup.mjs start | test | dev | reset | run NAME`.
 * Plain Node without packages, because on a new machine it is what installs them; the rest is TypeScript.
 */
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { addServerDirectoriesToPath, ensureDebianPackages } from './debian.mjs';
import { ensureNodePackages } from './node-packages.mjs';

const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));

const entries = {
  start: 'server/local/supervisor.ts',
  dev: 'server/local/supervisor.ts',
  reset: 'server/local/supervisor.ts',
  run: 'server/local/supervisor.ts',
  test: 'tests/support/run-tests.ts',
};

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > 20 || (major === 20 && minor >= 19)) return true;
  console.error(`Node ${process.versions.node} is too old: 20.19 or newer is needed.`);
  return false;
}

/** One file for what goes on in this process; the server and the workers are built by it, not here. */
async function bundle(entry) {
  const outfile = join(root, 'dist/local', entry.replace(/^.*\//, '').replace(/\.ts$/, '.js'));
  const esbuild = await import('esbuild');
  await esbuild.build({
    entryPoints: [entry],
    outfile,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    packages: 'external',
    sourcemap: 'inline',
    logLevel: 'warning',
  });
  await esbuild.stop();
  return outfile;
}

const command = process.argv[2] ?? '';
const entry = entries[command];
if (entry === undefined) {
  console.error(`Got "${command}", expected one of: ${Object.keys(entries).join(', ')}`);
  process.exit(1);
}
process.chdir(root);
addServerDirectoriesToPath();
const needsServices = command !== 'reset' && command !== 'run';
if (!checkNode()) process.exit(1);
if (needsServices && !ensureDebianPackages(command)) process.exit(1);
if (!ensureNodePackages()) process.exit(1);
const { main } = await import(pathToFileURL(await bundle(entry)).href);
process.exit(await main(process.argv.slice(2)));
