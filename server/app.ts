import compression from 'compression';
import express, { type Express } from 'express';
import { makeApi } from './api.ts';
import type { Deps } from './context.ts';
import { serveClient } from './middleware/client-files.ts';
import { answerProblem } from './middleware/problems.ts';
import { logRequests } from './middleware/request-log.ts';
import { setSecurityHeaders } from './middleware/security-headers.ts';
import type { RouteDefinition } from './route-definition.ts';
import { allRoutes } from './routes/table.ts';

/** The life of a request on one screen. Listens nowhere: start.ts and the tests do. */
export function createApp(deps: Deps, routes: readonly RouteDefinition[] = allRoutes): Express {
  const app = express();
  app.disable('x-powered-by');
  // Whoever can reach this port could write a proxy's headers: they are believed only where the settings say so.
  app.set('trust proxy', deps.config.trustProxy === 'loopback' ? 'loopback' : false);

  app.use(logRequests(deps.log));
  app.use(setSecurityHeaders(deps.config));
  app.use(compression({ filter: isWorthCompressing }));
  app.use('/api', makeApi(deps, routes));
  app.use(serveClient(deps.config.clientDir));
  app.use(answerProblem);
  return app;
}

/** An event that waits in a compressor for company arrives too late. */
const isWorthCompressing: compression.CompressionFilter = (request, response) =>
  !String(response.getHeader('content-type')).startsWith('text/event-stream') &&
  compression.filter(request, response);
