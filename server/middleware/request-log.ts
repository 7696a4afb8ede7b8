import { randomUUID } from 'node:crypto';
import type { IncomingMessage, ServerResponse } from 'node:http';
import type { Request, RequestHandler } from 'express';
import type { Logger } from 'pino';
import { pinoHttp } from 'pino-http';
import { describeFault } from '../log.ts';

/** One line a request to the API, with the id that the answer carries in x-request-id. */
export function logRequests(log: Logger): RequestHandler {
  return pinoHttp({
    logger: log,
    // Always our own: one sent from outside could repeat or imitate another's.
    genReqId(_request: IncomingMessage, response: ServerResponse) {
      const id = randomUUID();
      response.setHeader('x-request-id', id);
      return id;
    },
    customLogLevel: (_request, response) => (response.statusCode >= 500 ? 'error' : 'info'),
    autoLogging: { ignore: ({ url }) => url?.startsWith('/api/') !== true || url === '/api/health' },
    // Headers and bodies hold cookies and passwords: they are not written at all. Unless told not to, pino-http
    // gives these what it has already serialized, and a fault with all that hangs on it.
    wrapSerializers: false,
    serializers: {
      req: ({ id, method, originalUrl }: Request) => ({ id, method, url: originalUrl }),
      res: ({ statusCode }: ServerResponse) => ({ statusCode }),
      err: describeFault,
    },
    // The fault itself has its own line, from the one who answered it.
    customErrorObject: (_request, _response, _fault, { err: _made, ...line }) => line,
  });
}
