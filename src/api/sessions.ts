import type { DemoAccount, SessionView, SignIn } from '../../shared/schemas/sessions.ts';
import { getJson, rememberToken, sendJson } from './client.ts';

export async function getSession(): Promise<SessionView> {
  return rememberToken(await getJson<SessionView>('/api/session'));
}

export async function signIn(given: SignIn): Promise<SessionView> {
  return rememberToken(await sendJson<SessionView>('POST', '/api/session', given));
}

export async function signOut(): Promise<SessionView> {
  return rememberToken(await sendJson<SessionView>('DELETE', '/api/session'));
}

export function listDemoAccounts(): Promise<DemoAccount[]> {
  return getJson('/api/demo/accounts');
}
