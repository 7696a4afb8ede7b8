import type { Database } from '../connection.ts';

/** The value as it was stored; who reads a setting knows its shape. undefined where nobody has set it. */
export async function findSetting(db: Database, name: string): Promise<unknown> {
  const row = await db('settings').where({ name }).first<{ value: string } | undefined>('value');
  return row === undefined ? undefined : (JSON.parse(row.value) as unknown);
}

export async function saveSetting(trx: Database, name: string, value: unknown): Promise<void> {
  await trx('settings')
    .insert({ name, value: JSON.stringify(value) })
    .onConflict('name')
    .merge({ value: JSON.stringify(value), version: trx.raw('version + 1') });
}
