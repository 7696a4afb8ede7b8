import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { build, stop } from 'esbuild';
import { inheritEnvironment } from '../config.ts';

const entries = [
  'server/start.ts',
  'server/local/mailbox.ts',
  'workers/start.ts',
  'workers/compute.ts',
  'workers/prepare.ts',
];

const clientSources = ['src', 'shared', 'public', 'index.html', 'vite.config.ts', 'package-lock.json'];

/** `server/start.ts` becomes `<outDir>/server/start.js`; packages stay in node_modules. */
export async function buildServer(outDir: string): Promise<void> {
  await build({
    entryPoints: entries,
    outdir: outDir,
    outbase: '.',
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    packages: 'external',
    sourcemap: 'linked',
    logLevel: 'warning',
  });
  await stop();
}

function listFiles(path: string): string[] {
  if (!existsSync(path)) return [];
  if (!statSync(path).isDirectory()) return [path];
  return readdirSync(path)
    .sort()
    .flatMap((name) => listFiles(join(path, name)));
}

/** Moves with every file written, added or removed. */
function fingerprintClient(): string {
  const hash = createHash('sha256');
  for (const path of clientSources.flatMap(listFiles)) {
    const { size, mtimeMs } = statSync(path);
    hash.update(`${path} ${size} ${mtimeMs}\n`);
  }
  return hash.digest('hex');
}

/** Gives back whether it built: nothing is done where the pages are as new as their sources. */
export function buildClient(outDir: string): boolean {
  // Beside the pages, not among them, and written last: a build that was broken off is made again.
  const markFile = `${outDir}.built`;
  const fingerprint = fingerprintClient();
  if (existsSync(markFile) && readFileSync(markFile, 'utf8') === fingerprint) return false;
  rmSync(markFile, { force: true });
  mkdirSync(outDir, { recursive: true });
  const vite = 'node_modules/vite/bin/vite.js';
  const args = [vite, 'build', '--outDir', outDir, '--emptyOutDir', '--logLevel', 'error'];
  const result = spawnSync(process.execPath, args, {
    stdio: ['ignore', 'inherit', 'inherit'],
    env: inheritEnvironment({ NODE_ENV: 'production' }),
  });
  if (result.status !== 0) {
    throw new Error(
      `vite build ended with ${result.signal ?? `exit code ${result.status}`}, expected exit code 0`,
    );
  }
  writeFileSync(markFile, fingerprint);
  return true;
}
