// Starts workers/study.ts with plain Node: bundles it into .cache/ when the bundle is missing or older than a source.

import { mkdirSync, readFileSync, renameSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

const root = dirname(dirname(fileURLToPath(import.meta.url)));
const folder = join(root, '.cache', 'study');
const bundle = join(folder, 'study.mjs');
const inputsFile = join(folder, 'inputs.json');

/** Size and time of a source, by which a change is noticed. */
function stampOf(path) {
  const { size, mtimeMs } = statSync(resolve(root, path));
  return `${size} ${mtimeMs}`;
}

function isFresh() {
  try {
    statSync(bundle);
    const stamps = JSON.parse(readFileSync(inputsFile, 'utf8'));
    return Object.entries(stamps).every(([path, stamp]) => stampOf(path) === stamp);
  } catch {
    // Missing or unreadable files mean that there is no bundle to rely on.
    return false;
  }
}

/** Files are put in place by renaming, so that two starts at once cannot read half a bundle. */
function putInPlace(path, content) {
  const half = `${path}.${process.pid}`;
  writeFileSync(half, content);
  renameSync(half, path);
}

/** Gives the address of a new bundle. */
async function build() {
  const { build: bundleWith } = await import('esbuild');
  const { outputFiles, metafile } = await bundleWith({
    absWorkingDir: root,
    entryPoints: [relative(root, join(root, 'workers', 'study.ts'))],
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    metafile: true,
    write: false,
    logLevel: 'error',
  });
  const { contents } = outputFiles[0];
  const stamps = Object.fromEntries(Object.keys(metafile.inputs).map((path) => [path, stampOf(path)]));
  try {
    mkdirSync(folder, { recursive: true });
    putInPlace(bundle, contents);
    putInPlace(inputsFile, JSON.stringify(stamps));
    return pathToFileURL(bundle).href;
  } catch {
    // Where nothing can be kept, such as an installation that is only to be read, each start makes its own.
    return `data:text/javascript;base64,${Buffer.from(contents).toString('base64')}`;
  }
}

await import(isFresh() ? pathToFileURL(bundle).href : await build());
