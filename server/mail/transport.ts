import nodemailer from 'nodemailer';
import type { SmtpSettings } from '../config.ts';
import type { RenderedMail } from './render.ts';

interface Envelope {
  from: string | { name: string; address: string };
  to: string;
  messageId: string;
  date: Date;
}

export interface MailTransport {
  send(envelope: Envelope, mail: RenderedMail): Promise<void>;
  close(): void;
}

const waitMs = 10_000;

/** To a relay on the same machine, which needs no TLS; an unanswered connection is given up soon. */
export function openTransport(settings: SmtpSettings): MailTransport {
  const transport = nodemailer.createTransport({
    host: settings.host,
    port: settings.port,
    secure: false,
    ignoreTLS: true,
    connectionTimeout: waitMs,
    greetingTimeout: waitMs,
    socketTimeout: 3 * waitMs,
    // What people wrote into a letter is text, never a file or an address to fetch.
    disableFileAccess: true,
    disableUrlAccess: true,
  });
  return {
    async send({ from, to, messageId, date }, { subject, text, html }) {
      await transport.sendMail({
        from,
        // As an object: an address is never read as a list of several.
        to: { name: '', address: to },
        subject,
        text,
        html,
        date,
        messageId,
        headers: { 'Auto-Submitted': 'auto-generated' },
      });
    },
    close: () => transport.close(),
  };
}
