import { createHmac, randomBytes, timingSafeEqual } from 'node:crypto';
import type { Request, Response } from 'express';
import type { Config } from '../config.ts';

const cookieName = 'feederwright.browser';
const keptMilliseconds = 180 * 24 * 60 * 60_000;

function seal(secret: string, nonce: string, email: string): string {
  return createHmac('sha256', secret).update(`browser\n${nonce}\n${email}`).digest('base64url');
}

/**
 * A browser that this person has signed in from before keeps its own count of attempts: others who share its address
 * (all do, behind one proxy) can use up theirs, but never lock this one out.
 */
export function markBrowser(config: Config, email: string, response: Response): void {
  const nonce = randomBytes(16).toString('base64url');
  response.cookie(cookieName, `${nonce}.${seal(config.sessionSecret, nonce, email)}`, {
    httpOnly: true,
    sameSite: 'lax',
    secure: config.publicUrl.startsWith('https:'),
    path: '/api/session',
    maxAge: keptMilliseconds,
  });
}

/** What tells this browser apart, when it carries a mark made for this e-mail address. */
export function findBrowser(config: Config, email: string, request: Request): string | undefined {
  const value = new RegExp(`(?:^|;\\s*)${cookieName}=([\\w-]+)\\.([\\w-]+)`).exec(
    request.headers.cookie ?? '',
  );
  const [, nonce = '', given = ''] = value ?? [];
  const expected = Buffer.from(seal(config.sessionSecret, nonce, email));
  const got = Buffer.from(given);
  return got.length === expected.length && timingSafeEqual(got, expected) ? nonce : undefined;
}
