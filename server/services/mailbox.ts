import type { MessageRow, MessageView } from '../../shared/schemas/mailbox.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { notFound } from '../errors.ts';
import { listMessages, readMessage } from '../local/mailbox-store.ts';

/**
 * Addresses in a To line, in lower case: `"Ada" <ada@x.example>, bo@y.example`. Quoted names go first: a name that
 * reads like somebody's address must not open their messages to them.
 */
function readAddresses(to: string): string[] {
  const bare = to.toLowerCase().replace(/"(?:[^"\\]|\\.)*"/g, '');
  return bare.match(/[^\s<>,;]+@[^\s<>,;]+/g) ?? [];
}

/** Who a message is for; undefined where there is no such message. */
export async function listRecipients(mailboxDir: string, id: string): Promise<string[] | undefined> {
  const message = await readMessage(mailboxDir, id);
  return message && readAddresses(message.to);
}

export async function listMailbox(deps: Deps, context: SignedInContext): Promise<MessageRow[]> {
  const messages = await listMessages(deps.config.mailboxDir);
  const { role, email } = context.actor;
  if (role !== 'applicant') return messages;
  return messages.filter((message) => readAddresses(message.to).includes(email.toLowerCase()));
}

async function getMessage(deps: Deps, id: string) {
  const message = await readMessage(deps.config.mailboxDir, id);
  if (message === undefined) throw notFound('The message');
  return message;
}

export async function getMessageView(deps: Deps, id: string): Promise<MessageView> {
  const { html, ...message } = await getMessage(deps, id);
  return { ...message, hasHtml: html !== '' };
}

/** Foreign HTML: answered only under a policy that lets nothing in it run or load. */
export async function getMessageHtml(deps: Deps, id: string): Promise<string> {
  const { html } = await getMessage(deps, id);
  if (html === '') throw notFound('The HTML part of the message');
  return html;
}
