import { Type, type Static } from '@sinclair/typebox';

/** A screening that does not go on by itself. */
export interface StuckRunView {
  publicId: string;
  reference: string;
  applicationId: string;
  attempts: number;
  /** What everyone reads of it. */
  error: string;
  /** Names elements and causes. */
  errorDetail: string | null;
  since: string;
}

/** A letter that was tried often enough. */
export interface StuckMailView {
  /** Names it when it is to be tried again. */
  key: string;
  recipient: string;
  kind: string;
  /** Of the application it is about; null for a letter about none. */
  reference: string | null;
  applicationId: string | null;
  attempts: number;
  error: string | null;
  /** When it was written. */
  since: string;
}

export interface StuckWorkView {
  runs: StuckRunView[];
  mails: StuckMailView[];
  /** What waits or is under way and needs nobody. */
  waiting: { runs: number; mails: number };
}

export const MailRetry = Type.Object(
  { key: Type.String({ minLength: 1, maxLength: 160, errorMessage: 'Name the mail' }) },
  { additionalProperties: false },
);
export type MailRetry = Static<typeof MailRetry>;
