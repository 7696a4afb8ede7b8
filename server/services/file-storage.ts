import { createHash } from 'node:crypto';
import { mkdir, open, readdir, rename, rm, stat, unlink } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { newPublicId } from './public-ids.ts';

/** Uploads arrive here; whatever stays longer than a day was broken off. */
export function incomingDirectory(filesDir: string): string {
  return join(filesDir, 'incoming');
}

/** The hash of what is on the disk, once it is sure to be there. */
async function hashAndSync(path: string): Promise<Buffer> {
  const file = await open(path, 'r+');
  try {
    const hash = createHash('sha256');
    for await (const chunk of file.createReadStream({ autoClose: false })) hash.update(chunk as Buffer);
    await file.sync();
    return hash.digest();
  } finally {
    await file.close();
  }
}

async function syncDirectory(path: string): Promise<void> {
  const directory = await open(path, 'r');
  try {
    await directory.sync();
  } finally {
    await directory.close();
  }
}

interface KeptFile {
  /** Below the directory of files. */
  path: string;
  sha256: Buffer;
}

/** Moves an arrived file to a random name; two levels, so that no directory grows without end. */
export async function keepFile(filesDir: string, incomingPath: string): Promise<KeptFile> {
  const sha256 = await hashAndSync(incomingPath);
  const name = newPublicId();
  const path = join('uploads', name.slice(0, 2), name);
  const target = join(filesDir, path);
  await mkdir(dirname(target), { recursive: true });
  await rename(incomingPath, target);
  await syncDirectory(dirname(target));
  return { path, sha256 };
}

/** Gone is gone: a file that is not there is no fault. */
export async function removeFile(path: string): Promise<void> {
  await rm(path, { force: true });
}

async function listDirectory(path: string): Promise<string[]> {
  try {
    return await readdir(path);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return [];
    throw error;
  }
}

async function isOlder(path: string, before: Date): Promise<boolean> {
  const found = await stat(path).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return undefined; // moved or removed since it was listed
    throw error;
  });
  return found !== undefined && found.isFile() && found.mtime < before;
}

/** Removes what was broken off while it arrived. */
export async function removeOldArrivals(filesDir: string, before: Date): Promise<number> {
  const directory = incomingDirectory(filesDir);
  let removed = 0;
  for (const name of await listDirectory(directory)) {
    const path = join(directory, name);
    if (!(await isOlder(path, before))) continue;
    await unlink(path);
    removed += 1;
  }
  return removed;
}

/** Kept files written before `before`, shard by shard, as paths below the directory of files. */
export async function* listOldUploads(filesDir: string, before: Date): AsyncGenerator<string[]> {
  for (const shard of await listDirectory(join(filesDir, 'uploads'))) {
    const old: string[] = [];
    for (const name of await listDirectory(join(filesDir, 'uploads', shard))) {
      const path = join('uploads', shard, name);
      if (await isOlder(join(filesDir, path), before)) old.push(path);
    }
    if (old.length > 0) yield old;
  }
}
