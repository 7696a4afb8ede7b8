import type { MessageRow, MessageView } from '../../shared/schemas/mailbox.ts';
import { getJson } from './client.ts';

export function listMessages(): Promise<MessageRow[]> {
  return getJson('/api/mailbox');
}

export function getMessage(id: string): Promise<MessageView> {
  return getJson(`/api/mailbox/${encodeURIComponent(id)}`);
}

/** Shown in a sandboxed frame only; the server sends it with a policy of its own. */
export function messageHtmlAddress(id: string): string {
  return `/api/mailbox/${encodeURIComponent(id)}/html`;
}
