import { hash, verify } from '@node-rs/argon2';

/**
 * Argon2id, 19 MiB, 2 passes, 1 lane: the first of the minimum settings of the OWASP Password Storage Cheat Sheet
 * (value from memory), and this package's defaults.
 */
export function hashPassword(password: string): Promise<string> {
  return hash(password, { memoryCost: 19_456, timeCost: 2, parallelism: 1 });
}

let hashOfNobody: Promise<string> | undefined;

/** Without a hash (no such account) it works just as long, so that the time does not tell which addresses exist. */
export async function isPasswordRight(passwordHash: string | undefined, password: string): Promise<boolean> {
  if (passwordHash !== undefined) return verify(passwordHash, password);
  hashOfNobody ??= hashPassword('an account that does not exist');
  await verify(await hashOfNobody, password);
  return false;
}
