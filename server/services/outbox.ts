import type { Transaction } from '../../db/connection.ts';
import { findContact, insertMail } from '../../db/repositories/outbox.ts';
import type { CompleteAnswers } from '../../shared/schemas/answers.ts';
import type { Context } from '../context.ts';
import type { Mail, MailSubject } from '../mail/messages.ts';
import { getUtilitySettings, writeReference } from './utility-settings.ts';

/** Written with what causes it; the worker sends it after the commit. A key that was used is the same mail. */
export async function queueMail(trx: Transaction, context: Pick<Context, 'now'>, mail: Mail): Promise<void> {
  await insertMail(trx, { ...mail, createdAt: context.now });
}

/** The contact of the newest revision and what every mail says; undefined before anything was handed in. */
export async function findMailSubject(
  trx: Transaction,
  applicationId: number,
): Promise<(MailSubject & { recipient: string }) | undefined> {
  const row = await findContact(trx, applicationId);
  if (row === undefined || row.answers === null || row.number === null) return undefined;
  const { project } = JSON.parse(row.answers) as CompleteAnswers;
  return {
    recipient: project.contactEmail,
    reference: writeReference(await getUtilitySettings(trx), row.number),
    projectName: row.name,
    contactName: project.contactName,
    applicationPath: `/projects/${row.publicId}`,
  };
}
