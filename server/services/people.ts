import { listUsers } from '../../db/repositories/users.ts';
import type { PersonView } from '../../shared/schemas/people.ts';
import type { Deps } from '../context.ts';

export async function listPeople(deps: Deps): Promise<PersonView[]> {
  const users = await listUsers(deps.db);
  return users.map((user) => ({
    publicId: user.publicId,
    name: user.name,
    email: user.email,
    role: user.role,
    organisation: user.organisation?.name ?? null,
    disabled: user.disabledAt !== null,
  }));
}
