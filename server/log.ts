import { pino, type DestinationStream, type Logger } from 'pino';
import type { Config } from './config.ts';

/** What must never be written down, wherever a careless line would put it. */
const secretPaths = [
  'req.headers.cookie',
  'req.headers.authorization',
  'req.headers["x-csrf-token"]',
  'res.headers["set-cookie"]',
  'password',
  '*.password',
  '*.*.password',
];

/** No further property of a fault is kept: the database driver hangs the statement with its values onto it. */
export function describeFault(fault: unknown): object {
  if (!(fault instanceof Error)) return { message: String(fault) };
  const code = (fault as { code?: unknown }).code;
  return {
    type: fault.name,
    message: fault.message,
    stack: fault.stack,
    ...(code === undefined ? {} : { code }),
    ...(fault.cause === undefined ? {} : { cause: describeFault(fault.cause) }),
  };
}

export function createLog(level: Config['logLevel'], name: string, destination?: DestinationStream): Logger {
  const options = {
    level,
    base: { name },
    redact: { paths: secretPaths, censor: '[kept back]' },
    serializers: { err: describeFault },
  };
  return destination === undefined ? pino(options) : pino(options, destination);
}
