import { findSetting } from '../../db/repositories/settings.ts';
import type { Deps } from '../context.ts';

/** Healthy is: the tables are there and answer. */
export async function checkHealth(deps: Deps): Promise<{ ok: true }> {
  await findSetting(deps.db, 'utility');
  return { ok: true };
}
