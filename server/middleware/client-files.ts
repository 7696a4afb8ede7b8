import { join, resolve, sep } from 'node:path';
import express, { type RequestHandler } from 'express';
import { notFound } from '../errors.ts';

/**
 * The built pages. Names under /assets carry a hash of their content and may be kept for ever; index.html, which
 * answers every address of the client's own router, is asked for again each time.
 */
export function serveClient(clientDir: string): RequestHandler[] {
  const root = resolve(clientDir);
  const hashed = join(root, 'assets') + sep;
  const files = express.static(root, {
    index: false,
    redirect: false,
    setHeaders(response, path) {
      const lasting = path.startsWith(hashed);
      response.set('cache-control', lasting ? 'public, max-age=31536000, immutable' : 'no-cache');
    },
  });
  const page: RequestHandler = (request, response, next) => {
    const isPage = ['GET', 'HEAD'].includes(request.method) && !/\.\w+$/.test(request.path);
    if (!isPage) throw notFound();
    response.set('cache-control', 'no-cache');
    response.sendFile('index.html', { root }, (fault?: NodeJS.ErrnoException) => {
      if (fault === undefined || fault === null) return;
      next(fault.code === 'ENOENT' ? notFound('The built client (npm start makes it)') : fault);
    });
  };
  return [files, page];
}
