/** Brings node_modules into the state the lock file describes. Plain Node: runs before npm ci. */
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';

/**
 * npm leaves its own record of what it installed in node_modules, written last: comparing with that sees a
 * changed lock file, an install by hand, and one that was broken off half-way.
 */
function isInstalled() {
  const recordFile = 'node_modules/.package-lock.json';
  if (!existsSync(recordFile)) return false;
  const installed = JSON.parse(readFileSync(recordFile, 'utf8')).packages;
  const wanted = JSON.parse(readFileSync('package-lock.json', 'utf8')).packages;
  return Object.entries(wanted).every(([path, item]) => {
    if (path === '') return true;
    // Optional ones are builds for other systems: they are not installed here.
    const found = installed[path];
    if (found === undefined) return item.optional === true;
    return found.version === item.version && found.integrity === item.integrity;
  });
}

export function ensureNodePackages() {
  if (isInstalled()) return true;
  console.log('Installing npm packages from the lock file');
  const { npm_config_loglevel: _quiet, ...env } = process.env;
  // With NODE_ENV=production npm would leave out the build tools: --include=dev asks for them always.
  const result = spawnSync('npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel', 'error'], {
    stdio: ['ignore', 'ignore', 'inherit'],
    env,
  });
  if (result.status === 0) return true;
  console.error(`npm ci failed (${result.error ?? `exit code ${result.status}`}): see its message above.`);
  return false;
}
