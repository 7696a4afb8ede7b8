import { randomBytes } from 'node:crypto';

/** 128 random bits as 22 characters that a URL carries unchanged: nobody guesses a neighbour's. */
export function newPublicId(): string {
  return randomBytes(16).toString('base64url');
}
