import type { AddressInfo } from 'node:net';
import { SMTPServer, type SMTPServerDataStream } from 'smtp-server';
import { storeMessage } from './mailbox-store.ts';

const messageLimitBytes = 25_000_000;

export interface MailboxServer {
  port: number;
  stop(): Promise<void>;
}

async function readWhole(stream: SMTPServerDataStream): Promise<Buffer> {
  const parts: Buffer[] = [];
  for await (const part of stream) parts.push(part as Buffer);
  return Buffer.concat(parts);
}

async function accept(stream: SMTPServerDataStream, dir: string): Promise<string> {
  const raw = await readWhole(stream);
  if (stream.sizeExceeded) {
    throw Object.assign(new Error(`Message over ${messageLimitBytes} bytes`), { responseCode: 552 });
  }
  return `Kept as ${await storeMessage(dir, raw, new Date())}`;
}

/** A real SMTP server that delivers nothing: what it is given, it keeps. Says "250" only after the file is synced. */
export function startMailboxServer(dir: string, port: number): Promise<MailboxServer> {
  const server = new SMTPServer({
    name: 'localhost',
    banner: 'Feederwright local mailbox',
    disabledCommands: ['AUTH', 'STARTTLS'],
    disableReverseLookup: true,
    logger: false,
    size: messageLimitBytes,
    closeTimeout: 1000,
    onData: (stream, _session, callback) => {
      accept(stream, dir).then(
        (message) => callback(null, message),
        (error: Error) => callback(error),
      );
    },
  });
  return new Promise((resolve, reject) => {
    server.once('error', reject);
    server.listen(port, '127.0.0.1', () => {
      server.off('error', reject);
      server.on('error', (error) => console.error(`mailbox: ${error.message}`));
      resolve({
        port: (server.server.address() as AddressInfo).port,
        stop: () => new Promise((done) => server.close(done)),
      });
    });
  });
}
