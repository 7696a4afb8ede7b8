import { findSetting } from '../../db/repositories/settings.ts';
import { findUserByEmail, findUserById, type User } from '../../db/repositories/users.ts';
import type { Database } from '../../db/connection.ts';
import type { DemoAccount, SessionView, SignedInUser, SignIn } from '../../shared/schemas/sessions.ts';
import type { Actor, Context, Deps } from '../context.ts';
import { notFound, notSignedIn } from '../errors.ts';
import { isPasswordRight } from './passwords.ts';

function toActor(user: User): Actor {
  const { id, publicId, name, email, role } = user;
  return { id, publicId, name, email, role, organisationId: user.organisation?.id ?? null };
}

/** The person, when the password is theirs and the account is open; otherwise a refusal in words. */
export async function checkPassword(deps: Deps, signIn: SignIn): Promise<Actor> {
  const user = await findUserByEmail(deps.db, signIn.email.trim().toLowerCase());
  const right = await isPasswordRight(user?.passwordHash, signIn.password);
  if (user === undefined || !right) {
    throw notSignedIn('sign-in-failed', 'E-mail address and password do not belong together');
  }
  // Only who knows the password learns that the account exists and is closed.
  if (user.disabledAt !== null) throw notSignedIn('account-disabled', 'This account is closed');
  return toActor(user);
}

/** Asked at every request: an account closed a moment ago ends its sessions, a changed role counts at once. */
export async function findActor(db: Database, userId: number): Promise<Actor | undefined> {
  const user = await findUserById(db, userId);
  return user === undefined || user.disabledAt !== null ? undefined : toActor(user);
}

/** For scripts that act in somebody's name. */
export async function getActorByEmail(db: Database, email: string): Promise<Actor> {
  const user = await findUserByEmail(db, email);
  if (user === undefined) throw notFound(`The account ${email}`);
  return toActor(user);
}

const unnamedUtility: SessionView['utility'] = {
  name: 'The utility',
  territory: '',
  timeZone: 'UTC',
  contactEmail: '',
};

async function findSignedInUser(db: Database, actor: Actor): Promise<SignedInUser | null> {
  const user = await findUserById(db, actor.id);
  if (user === undefined) return null;
  const { publicId, name, email, role, organisation } = user;
  return {
    publicId,
    name,
    email,
    role,
    organisation: organisation && { publicId: organisation.publicId, name: organisation.name },
  };
}

export async function getSessionView(deps: Deps, context: Context, csrfToken: string): Promise<SessionView> {
  const stored = (await findSetting(deps.db, 'utility')) as Partial<SessionView['utility']> | undefined;
  const { name, territory, timeZone, contactEmail } = { ...unnamedUtility, ...stored };
  return {
    user: context.actor && (await findSignedInUser(deps.db, context.actor)),
    csrfToken,
    demo: deps.config.demo,
    utility: { name, territory, timeZone, contactEmail },
  };
}

/** Passwords of demo accounts are no secret; access.ts closes this outside a demo. */
export async function listDemoAccounts(deps: Deps): Promise<DemoAccount[]> {
  return ((await findSetting(deps.db, 'demo.accounts')) as DemoAccount[] | undefined) ?? [];
}
