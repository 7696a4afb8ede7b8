/** Finds the Debian packages that are missing and installs them where it may. Plain Node: runs before npm ci. */
import { spawnSync } from 'node:child_process';
import { accessSync, constants, existsSync, rmSync, writeFileSync } from 'node:fs';
import { delimiter, join } from 'node:path';

// The core packages bring the programs without a service of their own.
const servicePackages = [
  { name: 'mariadb-server-core', program: 'mariadbd' },
  // Not for the client: mariadb-install-db calls this part of it.
  { name: 'mariadb-client-core', program: 'my_print_defaults' },
  { name: 'redis-server', program: 'redis-server' },
];
const testPackages = [{ name: 'chromium', program: 'chromium' }];

const policyFile = '/usr/sbin/policy-rc.d';

/** Debian keeps servers in /usr/sbin, which is not on an ordinary person's PATH. */
export function addServerDirectoriesToPath() {
  const present = (process.env.PATH ?? '').split(delimiter);
  const wanted = ['/usr/local/sbin', '/usr/sbin', '/sbin', '/usr/bin'].filter(
    (path) => !present.includes(path),
  );
  process.env.PATH = [...present, ...wanted].join(delimiter);
}

function hasProgram(program) {
  return (process.env.PATH ?? '').split(delimiter).some((directory) => {
    try {
      accessSync(join(directory, program), constants.X_OK);
      return true;
    } catch {
      return false; // not in this directory: the next one is asked
    }
  });
}

function runApt(args) {
  const result = spawnSync('apt-get', ['-o', 'DPkg::Lock::Timeout=120', ...args], {
    stdio: ['ignore', 'ignore', 'pipe'],
    encoding: 'utf8',
    env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
  });
  if (result.status !== 0) {
    throw new Error(`apt-get ${args[0]} failed:\n${result.stderr || String(result.error ?? '')}`);
  }
}

/** redis-server comes with a service: this keeps it from starting now, and at the next boot. */
function installWithoutServices(names) {
  const addPolicy = !existsSync(policyFile);
  if (addPolicy) writeFileSync(policyFile, '#!/bin/sh\nexit 101\n', { mode: 0o755 });
  try {
    runApt(['update']);
    runApt(['install', '-y', '--no-install-recommends', ...names]);
  } finally {
    if (addPolicy) rmSync(policyFile);
  }
  if (names.includes('redis-server') && existsSync('/run/systemd/system')) {
    spawnSync('systemctl', ['disable', '--now', 'redis-server'], { stdio: 'ignore' });
  }
}

function explainInstall(names, programs) {
  const list = names.join(' ');
  console.error(`These programs are missing: ${programs.join(', ')}.`);
  if (!hasProgram('apt-get')) {
    console.error(
      `There is no apt-get here. Install what Debian calls ${list}, so that they are on the PATH.`,
    );
    return;
  }
  console.error('Install them as root with this, then start again:\n');
  console.error(`  sudo apt-get update && sudo apt-get install -y --no-install-recommends ${list}`);
  if (names.includes('redis-server')) {
    console.error('  sudo systemctl disable --now redis-server   # its own service is not needed here');
  }
}

/** Gives back whether everything is there; says why and what to do where it is not. */
export function ensureDebianPackages(command) {
  const wanted = command === 'test' ? [...servicePackages, ...testPackages] : servicePackages;
  const missing = wanted.filter((item) => !hasProgram(item.program));
  if (missing.length === 0) return true;
  const names = missing.map((item) => item.name);
  const programs = missing.map((item) => item.program);
  const canInstall = hasProgram('apt-get') && process.getuid?.() === 0;
  if (!canInstall) {
    explainInstall(names, programs);
    return false;
  }
  console.log(`Installing Debian packages: ${names.join(', ')}`);
  try {
    installWithoutServices(names);
  } catch (error) {
    console.error(error.message);
    explainInstall(names, programs);
    return false;
  }
  const still = missing.filter((item) => !hasProgram(item.program));
  if (still.length === 0) return true;
  console.error(`Installed, but still not on the PATH: ${still.map((item) => item.program).join(', ')}.`);
  return false;
}
