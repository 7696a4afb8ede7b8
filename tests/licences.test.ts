import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

interface Lock {
  packages: Record<string, { version?: string; license?: string }>;
}

/** Licences that let the product be sold without conditions on its own code. */
const permitted =
  /^(MIT|MIT-0|ISC|0BSD|BSD-2-Clause|BSD-3-Clause|Apache-2\.0|BlueOak-1\.0\.0|OFL-1\.1|MPL-2\.0|\(MIT OR EUPL-1\.1\+\)|\(MIT AND Zlib\))$/;
/** Packages whose licence is permissive but missing in the lock file, read in the package itself. */
const readByHand: Record<string, string> = {
  'node_modules/busboy': 'MIT',
  'node_modules/passport-local': 'MIT',
  'node_modules/passport-strategy': 'MIT',
  'node_modules/pause': 'MIT',
  'node_modules/png-js': 'MIT',
  'node_modules/streamsearch': 'MIT',
};

const lock = JSON.parse(readFileSync('package-lock.json', 'utf8')) as Lock;
const packages = Object.entries(lock.packages).filter(([path]) => path !== '');

describe('the packages we ship and build with', () => {
  it('have licences that permit it, each named in the lock file', () => {
    const refused = packages
      .map(([path, { license }]) => ({ path, license: license ?? readByHand[path] ?? 'none given' }))
      .filter(({ license }) => !permitted.test(license));
    expect(refused).toEqual([]);
  });

  it('are pinned exactly where we ask for them ourselves', () => {
    const own = JSON.parse(readFileSync('package.json', 'utf8')) as Record<string, Record<string, string>>;
    const loose = Object.entries({ ...own.dependencies, ...own.devDependencies }).filter(
      ([, version]) => !/^\d/.test(version),
    );
    expect(loose).toEqual([]);
  });
});
