import { createHash } from 'node:crypto';
import { inTransaction, type Database } from '../../db/connection.ts';
import { insertEquipmentVersion } from '../../db/repositories/equipment.ts';
import { insertOrganisation } from '../../db/repositories/organisations.ts';
import { saveSetting } from '../../db/repositories/settings.ts';
import { insertUser } from '../../db/repositories/users.ts';
import { makeDemoEquipment } from '../../db/seeds/demo/equipment.ts';
import { demoOrganisations, demoPeople } from '../../db/seeds/demo/people.ts';
import { hashPassword } from '../../server/services/passwords.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import type { DemoAccount } from '../../shared/schemas/sessions.ts';

export const demoAccounts: DemoAccount[] = demoPeople
  .filter((person) => person.isListed)
  .map(({ role, name, email, password }) => ({ role, name, email, password }));

/** Organisations, people and the utility's own settings; gives nothing back because everything is found by name. */
export async function plantPeople(db: Database): Promise<void> {
  const hashes = await Promise.all(demoPeople.map((person) => hashPassword(person.password)));
  await inTransaction(db, async (trx) => {
    const ids = new Map<string, number>();
    for (const { code, name } of demoOrganisations) {
      ids.set(code, await insertOrganisation(trx, { publicId: newPublicId(), name }));
    }
    for (const [index, person] of demoPeople.entries()) {
      const { name, email, role } = person;
      const organisationId = person.organisation === null ? null : (ids.get(person.organisation) ?? null);
      const passwordHash = hashes[index] ?? '';
      await insertUser(trx, { publicId: newPublicId(), organisationId, email, name, passwordHash, role });
    }
    await saveSetting(trx, 'utility', {
      name: 'Marrowbank Light & Power',
      territory: 'Tessaly Vale',
      timeZone: 'America/New_York',
      contactEmail: 'connections@marrowbank.example',
      referencePrefix: 'ML',
    });
    await saveSetting(trx, 'demo.accounts', demoAccounts);
  });
}

/** Equipment records; gives the public id by the code that the demo's applications use. */
export async function plantEquipment(db: Database): Promise<void> {
  await inTransaction(db, async (trx) => {
    const codes: Record<string, string> = {};
    for (const [index, { code, ...record }] of makeDemoEquipment().entries()) {
      const publicId = newPublicId();
      codes[code] = publicId;
      const sha256 = createHash('sha256').update(JSON.stringify(record)).digest();
      await insertEquipmentVersion(trx, {
        ...record,
        publicId,
        equipmentId: index + 1,
        number: 1,
        sha256,
        state: 'released',
      });
    }
    await saveSetting(trx, 'demo.equipment-codes', codes);
  });
}
