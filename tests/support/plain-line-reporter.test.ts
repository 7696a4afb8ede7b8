import { spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';

let dir: string;

beforeEach(() => {
  // Inside the repository: the planted test files must find vitest.
  mkdirSync('.cache', { recursive: true });
  dir = mkdtempSync(resolve('.cache', 'planted-'));
  writeFileSync(join(dir, 'vitest.config.mjs'), `export default { test: { include: ['*.planted.mjs'] } };\n`);
});

afterEach(() => rmSync(dir, { recursive: true }));

function plant(name: string, body: string): void {
  const imports = `import { beforeAll, describe, expect, it } from 'vitest';\n`;
  writeFileSync(join(dir, `${name}.planted.mjs`), `${imports}${body}\n`);
}

function runPlanted(): string {
  const env = { ...process.env, FEEDERWRIGHT_COUNTS_FILE: undefined };
  const reporter = `--reporter=${resolve('tests/support/plain-line-reporter.ts')}`;
  const args = ['node_modules/vitest/vitest.mjs', 'run', '--root', dir, '--reporter=default', reporter];
  const { stdout } = spawnSync(process.execPath, args, { env, encoding: 'utf8' });
  return stdout.trimEnd().split('\n').at(-1) ?? '';
}

describe('the reporter of the plain line', () => {
  it('puts the totals alone on the last line, when tests pass, fail and are skipped', () => {
    plant('a', `it('one', () => expect(1).toBe(1));\nit.skip('two', () => expect(1).toBe(1));`);
    plant('b', `it('three', () => expect(1).toBe(2));\nit('four', () => expect(1).toBe(1));`);
    expect(runPlanted()).toBe('2 passed, 1 failed, 1 skipped');
  });

  it('counts a failure, when a file does not load', () => {
    plant('a', `it('one', () => expect(1).toBe(1));`);
    plant('b', `throw new Error('does not load');`);
    expect(runPlanted()).toBe('1 passed, 1 failed');
  });

  it('counts a failure, when what a group of tests needs cannot be made', () => {
    plant(
      'a',
      `describe('group', () => { beforeAll(() => { throw new Error('no database'); }); it('one', () => undefined); });`,
    );
    expect(runPlanted()).toMatch(/^0 passed, [12] failed/);
  });

  it('counts a failure, when a promise is rejected outside of any test', () => {
    plant(
      'a',
      `it('one', () => { setTimeout(() => { throw new Error('late'); }, 0); });\nit('two', () => new Promise((done) => setTimeout(done, 100)));`,
    );
    expect(runPlanted()).toBe('2 passed, 1 failed');
  });
});
