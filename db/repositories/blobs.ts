import { createHash } from 'node:crypto';
import { promisify } from 'node:util';
import { gunzip, gzip } from 'node:zlib';
import type { Database } from '../connection.ts';

const compress = promisify(gzip);
const expand = promisify(gunzip);

/** Keeps the bytes once, whoever brings them; gives the SHA-256 of the uncompressed bytes. */
export async function insertBlob(trx: Database, bytes: Buffer): Promise<Buffer> {
  const sha256 = createHash('sha256').update(bytes).digest();
  const known = await trx('blobs').where({ sha256 }).first<{ raw_length: number } | undefined>('raw_length');
  if (known !== undefined) return sha256;
  // Level 1: a large result is mostly digits, where more effort costs seconds and saves little.
  const packed = await compress(bytes, { level: 1 });
  await trx('blobs').insert({ sha256, gzip: packed, raw_length: bytes.length }).onConflict('sha256').ignore();
  return sha256;
}

/** The bytes as they were stored; fails when they are not there or no longer give their own hash. */
export async function getBlob(db: Database, sha256: Buffer): Promise<Buffer> {
  const row = await db('blobs').where({ sha256 }).first<{ gzip: Buffer } | undefined>('gzip');
  if (row === undefined) throw new Error(`No blob has the hash ${sha256.toString('hex')}`);
  const bytes = await expand(row.gzip);
  const found = createHash('sha256').update(bytes).digest();
  if (!found.equals(sha256)) {
    throw new Error(`Damaged blob: got ${found.toString('hex')}, expected ${sha256.toString('hex')}`);
  }
  return bytes;
}
