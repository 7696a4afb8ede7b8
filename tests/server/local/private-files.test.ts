import { mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { keepSecrets } from '../../../server/local/private-files.ts';

let dir: string;

beforeEach(() => {
  dir = mkdtempSync(join(tmpdir(), 'feederwright-secrets-'));
});

afterEach(() => rmSync(dir, { recursive: true }));

describe('keepSecrets', () => {
  it('makes them once, and lets nobody else read them', () => {
    const secrets = keepSecrets(dir);
    expect(keepSecrets(dir)).toEqual(secrets);
    expect(new Set(Object.values(secrets)).size).toBe(3);
    expect(statSync(join(dir, 'secrets.json')).mode & 0o777).toBe(0o600);
  });

  it('adds one that an older version did not make, and keeps the others', () => {
    writeFileSync(join(dir, 'secrets.json'), JSON.stringify({ database: 'kept' }));
    expect(keepSecrets(dir)).toMatchObject({
      database: 'kept',
      session: expect.stringMatching(/^[0-9a-f]{64}$/),
    });
  });

  it('refuses to make new ones over a damaged file, which would shut out the databases', () => {
    writeFileSync(join(dir, 'secrets.json'), '{"database": "ke');
    expect(() => keepSecrets(dir)).toThrow(/secrets\.json is not JSON/);
  });
});
