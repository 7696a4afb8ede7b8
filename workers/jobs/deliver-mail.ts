import { createHash, randomBytes } from 'node:crypto';
import { inTransaction } from '../../db/connection.ts';
import { claimMail, markMailFailed, markMailSent, type ClaimedMail } from '../../db/repositories/outbox.ts';
import type { Deps } from '../../server/context.ts';
import type { MailKind, MailPayload } from '../../server/mail/messages.ts';
import { renderMail, type Sender } from '../../server/mail/render.ts';
import type { MailTransport } from '../../server/mail/transport.ts';
import { getUtilitySettings } from '../../server/services/utility-settings.ts';

export interface DeliveryDeps extends Pick<Deps, 'db' | 'config' | 'log'> {
  transport: MailTransport;
  now(): Date;
}

/** Longer than a sending can take: nobody else sends the mail meanwhile. */
const leaseMs = 120_000;
/** Before the next try; a relay that stays away is asked every quarter of an hour, about two hours in all. */
const delaysSeconds = [5, 15, 60, 120, 300, 600, 900];
const mostAttempts = 12;

/** Made from the row alone, so that a repeat of the same mail is known for one. */
function makeMessageId(mail: Pick<ClaimedMail, 'id' | 'dedupeKey'>, publicUrl: string): string {
  const hash = createHash('sha256').update(`${mail.id} ${mail.dedupeKey}`).digest('hex').slice(0, 32);
  return `<outbox-${mail.id}-${hash}@${new URL(publicUrl).hostname}>`;
}

async function describeSender({ db, config }: DeliveryDeps): Promise<Sender> {
  const { name, contactEmail } = await getUtilitySettings(db);
  return { publicUrl: config.publicUrl, utilityName: name, contactEmail };
}

/** The address that the letter's own last lines give; without one in the settings, one of the desk's host. */
function makeFrom({ utilityName, contactEmail, publicUrl }: Sender): { name: string; address: string } {
  return { name: utilityName, address: contactEmail || `desk@${new URL(publicUrl).hostname}` };
}

function nextAttemptAt(deps: DeliveryDeps, attempts: number): Date | null {
  if (attempts >= mostAttempts) return null;
  const delaySeconds = delaysSeconds[Math.min(attempts, delaysSeconds.length) - 1] ?? 5;
  return new Date(deps.now().getTime() + delaySeconds * 1000);
}

async function send(deps: DeliveryDeps, mail: ClaimedMail): Promise<void> {
  const messageId = makeMessageId(mail, deps.config.publicUrl);
  try {
    const sender = await describeSender(deps);
    const rendered = renderMail(mail.kind as MailKind, mail.payload as MailPayload<MailKind>, sender);
    const from = deps.config.mailFrom ?? makeFrom(sender);
    const envelope = { from, to: mail.recipient, messageId, date: mail.createdAt };
    await deps.transport.send(envelope, rendered);
  } catch (error) {
    const nextAt = nextAttemptAt(deps, mail.attempts + 1);
    const words = error instanceof Error ? error.message : String(error);
    deps.log.warn({ err: error, outboxId: mail.id, nextAt }, nextAt ? 'Mail not sent' : 'Mail parked');
    await markMailFailed(deps.db, mail, words, nextAt);
    return;
  }
  // A worker that ends right here sends it a second time later, with the same Message-ID.
  await markMailSent(deps.db, mail, messageId, deps.now());
}

/** Sends what is due, one after the other. Gives back how many were tried. */
export async function deliverMail(deps: DeliveryDeps): Promise<number> {
  for (let tried = 0; ; tried += 1) {
    const now = deps.now();
    const claim = { token: randomBytes(16), now, leaseUntil: new Date(now.getTime() + leaseMs) };
    const mail = await inTransaction(deps.db, (trx) => claimMail(trx, claim));
    if (mail === undefined) return tried;
    await send(deps, mail);
  }
}
