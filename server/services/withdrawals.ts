import { inTransaction } from '../../db/connection.ts';
import type { ApplicationView, Withdrawal } from '../../shared/schemas/applications.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { announce } from './announcements.ts';
import { getApplicationView } from './applications.ts';
import { findMailSubject, queueMail } from './outbox.ts';
import { leaveQueue } from './queue-entries.ts';
import { checkVersion, lockWithModel, moveApplication } from './transitions.ts';

/** The applicant takes it back; who stood behind it in the queue is screened again without it. */
export async function withdraw(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Withdrawal,
): Promise<ApplicationView> {
  const { changed, runs } = await inTransaction(deps.db, async (trx) => {
    const { application } = await lockWithModel(trx, publicId);
    await checkVersion(trx, context, application, body.version);
    const moved = await moveApplication(trx, context, application, 'withdraw', body.reason);
    const rescreened = await leaveQueue(trx, context, moved);
    const subject = await findMailSubject(trx, moved.id);
    if (subject !== undefined) {
      const { recipient, ...about } = subject;
      await queueMail(trx, context, {
        kind: 'withdrawn',
        dedupeKey: `withdrawn:${publicId}`,
        applicationId: moved.id,
        recipient,
        payload: { ...about, reason: body.reason },
      });
    }
    return { changed: moved, runs: rescreened };
  });
  await announce(deps, { applications: [changed], runs });
  return getApplicationView(deps, context, publicId);
}
