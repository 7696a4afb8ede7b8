import type { RequestHandler } from 'express';
import { notSignedIn } from '../errors.ts';

/** This API is for the pages: a cookie and nothing else, so that no request can be both. */
export const refuseBearer: RequestHandler = (request, _response, next) => {
  if (/^bearer\b/i.test(request.headers.authorization ?? '')) {
    throw notSignedIn('bearer-refused', 'This address takes the session of the pages, not a token');
  }
  next();
};
