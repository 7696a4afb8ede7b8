/** The demo's local mailbox. */
export interface MessageRow {
  id: string;
  receivedAt: string;
  from: string;
  to: string;
  subject: string;
  messageId: string;
}

export interface MessageView extends MessageRow {
  text: string;
  hasHtml: boolean;
}
