import type { Database, Transaction } from '../connection.ts';

export async function insertOrganisation(
  trx: Database,
  organisation: { publicId: string; name: string },
): Promise<number> {
  const [id] = await trx('organisations').insert({
    public_id: organisation.publicId,
    name: organisation.name,
  });
  return id as number;
}

/** Two of one organisation that count before they add wait for each other. */
export async function lockOrganisation(trx: Transaction, id: number): Promise<void> {
  await trx('organisations').where({ id }).forUpdate().first('id');
}
