import { inTransaction, type Transaction } from '../../db/connection.ts';
import type { Application } from '../../db/repositories/applications.ts';
import { listClocks } from '../../db/repositories/clocks.ts';
import { transitions, type ApplicationEvent } from '../../shared/rules/application-life.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type { ApplicationView, Move } from '../../shared/schemas/applications.ts';
import { formatDate } from '../../shared/format.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { invalid, refused } from '../errors.ts';
import { announce } from './announcements.ts';
import { getApplicationView } from './applications.ts';
import { findMailSubject, queueMail } from './outbox.ts';
import { leaveQueue } from './queue-entries.ts';
import { checkVersion, getTransition, lockWithModel, moveApplication } from './transitions.ts';
import { getUtilitySettings } from './utility-settings.ts';

function getRecordedEvent(event: string): ApplicationEvent {
  const known = transitions.find((transition) => transition.by === 'record' && transition.event === event);
  if (known === undefined) throw invalid([{ path: 'event', message: 'Choose one of the steps offered' }]);
  return known.event;
}

/** An application lapses when a time limit of the applicant's has passed, and not before. */
async function checkLapsed(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
): Promise<void> {
  const { timeZone } = await getUtilitySettings(trx);
  const today = localDate(context.now, timeZone);
  const clocks = await listClocks(trx, [application.id]);
  const paused = (pauses: { toOn: string | null }[]) => pauses.some((pause) => pause.toOn === null);
  const running = clocks.find((clock) => clock.stoppedAt === null && !paused(clock.pauses));
  if (running !== undefined && running.dueOn >= today) {
    const due = formatDate(running.dueOn);
    throw refused('not-lapsed', `It cannot lapse yet: the applicant has until the end of ${due}`);
  }
}

/** A step that happened elsewhere (an agreement signed, a test set), recorded with a note. */
export async function recordMove(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Move,
): Promise<ApplicationView> {
  const event = getRecordedEvent(body.event);
  const { changed, runs } = await inTransaction(deps.db, async (trx) => {
    const { application } = await lockWithModel(trx, publicId);
    await checkVersion(trx, context, application, body.version);
    getTransition(context, application, event);
    if (event === 'lapse') await checkLapsed(trx, context, application);
    const moved = await moveApplication(trx, context, application, event, body.note);
    await mailMove(trx, context, moved, body.note);
    const rescreened = event === 'lapse' ? await leaveQueue(trx, context, moved) : [];
    return { changed: moved, runs: rescreened };
  });
  await announce(deps, { applications: [changed], runs });
  return getApplicationView(deps, context, publicId);
}

async function mailMove(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  note: string,
): Promise<void> {
  const subject = await findMailSubject(trx, application.id);
  if (subject === undefined) return;
  const { recipient, ...about } = subject;
  await queueMail(trx, context, {
    kind: 'moved',
    dedupeKey: `moved:${application.publicId}:${application.version}`,
    applicationId: application.id,
    recipient,
    payload: { ...about, stage: application.stage, note },
  });
}
