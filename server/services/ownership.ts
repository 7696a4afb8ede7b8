import {
  findApplicationOwner,
  findFileOwner,
  findReportOwner,
  findRunOwner,
} from '../../db/repositories/ownership.ts';
import type { ApplicationOwner } from '../../db/repositories/ownership.ts';
import type { Reach, Subject } from '../access.ts';
import type { Actor, Deps } from '../context.ts';
import { listRecipients } from './mailbox.ts';

/** Whose a thing is. */
interface Owner {
  organisationId?: number;
  /** For what belongs to a person by their address. */
  emails?: string[];
  /** Not handed in yet: nobody else sees it, whatever their role. */
  unfinished?: boolean;
}

function ofApplication(found: ApplicationOwner | undefined): Owner | undefined {
  return found && { organisationId: found.organisationId, unfinished: found.stage === 'draft' };
}

const loaders: Record<Subject, (deps: Deps, id: string) => Promise<Owner | undefined>> = {
  application: async ({ db }, id) => ofApplication(await findApplicationOwner(db, id)),
  run: async ({ db }, id) => ofApplication(await findRunOwner(db, id)),
  file: async ({ db }, id) => {
    const found = await findFileOwner(db, id);
    return found && { organisationId: found.organisationId, unfinished: !found.isHandedIn };
  },
  report: ({ db }, id) => findReportOwner(db, id),
  message: async ({ config }, id) => {
    const emails = await listRecipients(config.mailboxDir, id);
    return emails && { emails };
  },
};

function isOwn(actor: Actor, owner: Owner): boolean {
  if (owner.emails !== undefined) return owner.emails.includes(actor.email.toLowerCase());
  return actor.organisationId !== null && owner.organisationId === actor.organisationId;
}

/** Whether the thing is there and within the actor's reach; the answer to both is the same 404. */
export async function isWithinReach(
  deps: Deps,
  actor: Actor,
  reach: Reach,
  subject: Subject,
  id: string,
): Promise<boolean> {
  if (reach === 'none') return false;
  const owner = await loaders[subject](deps, id);
  if (owner === undefined) return false;
  return isOwn(actor, owner) || (reach === 'any' && owner.unfinished !== true);
}
