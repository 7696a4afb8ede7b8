import { setTimeout as sleep } from 'node:timers/promises';

/** Looks again and again until what is wanted is there; gives it back, or fails with what was there last. */
export async function until<T>(
  look: () => Promise<T> | T,
  isThere: (found: T) => boolean,
  seconds = 25,
): Promise<T> {
  const end = Date.now() + seconds * 1000;
  for (;;) {
    const found = await look();
    if (isThere(found)) return found;
    if (Date.now() > end) throw new Error(`Not within ${seconds} s; at last ${JSON.stringify(found)}`);
    await sleep(50);
  }
}
