import type { Role } from '../../shared/schemas/sessions.ts';
import type { Database } from '../connection.ts';

export interface User {
  id: number;
  publicId: string;
  name: string;
  email: string;
  role: Role;
  passwordHash: string;
  disabledAt: Date | null;
  organisation: { id: number; publicId: string; name: string } | null;
}

interface UserRow {
  id: number;
  public_id: string;
  name: string;
  email: string;
  role: Role;
  password_hash: string;
  disabled_at: Date | null;
  organisation_id: number | null;
  organisation_public_id: string | null;
  organisation_name: string | null;
}

function selectUsers(db: Database) {
  return db('users')
    .leftJoin('organisations', 'organisations.id', 'users.organisation_id')
    .select<UserRow[]>(
      'users.*',
      'organisations.public_id as organisation_public_id',
      'organisations.name as organisation_name',
    );
}

function toUser(row: UserRow): User {
  const { organisation_id: id, organisation_public_id: publicId, organisation_name: name } = row;
  return {
    id: row.id,
    publicId: row.public_id,
    name: row.name,
    email: row.email,
    role: row.role,
    passwordHash: row.password_hash,
    disabledAt: row.disabled_at,
    organisation: id === null || publicId === null || name === null ? null : { id, publicId, name },
  };
}

/** Addresses are kept in lower case; `email` is compared as it is given. */
export async function findUserByEmail(db: Database, email: string): Promise<User | undefined> {
  const rows = await selectUsers(db).where('users.email', email);
  return rows.map(toUser)[0];
}

export async function findUserById(db: Database, id: number): Promise<User | undefined> {
  const rows = await selectUsers(db).where('users.id', id);
  return rows.map(toUser)[0];
}

export async function listUsers(db: Database): Promise<User[]> {
  const rows = await selectUsers(db).orderBy(['users.name', 'users.id']);
  return rows.map(toUser);
}

export interface NewUser {
  publicId: string;
  organisationId: number | null;
  email: string;
  name: string;
  passwordHash: string;
  role: Role;
}

export async function insertUser(trx: Database, user: NewUser): Promise<number> {
  const [id] = await trx('users').insert({
    public_id: user.publicId,
    organisation_id: user.organisationId,
    email: user.email.toLowerCase(),
    name: user.name,
    password_hash: user.passwordHash,
    role: user.role,
  });
  return id as number;
}
