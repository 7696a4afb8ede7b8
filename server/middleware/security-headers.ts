import type { RequestHandler } from 'express';
import helmet from 'helmet';
import type { Config } from '../config.ts';

const self = "'self'";
const none = "'none'";

/** Nothing inline, nothing evaluated, nothing from elsewhere, and nobody frames us. */
export function setSecurityHeaders(config: Config): RequestHandler {
  return helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: [self],
        scriptSrc: [self],
        styleSrc: [self],
        imgSrc: [self, 'data:', 'blob:'],
        fontSrc: [self],
        connectSrc: [self],
        frameSrc: [self],
        objectSrc: [none],
        baseUri: [none],
        formAction: [self],
        frameAncestors: [none],
      },
    },
    xFrameOptions: { action: 'deny' },
    // Only a proxy that speaks TLS makes the address https; on plain http the header would mean nothing.
    strictTransportSecurity: config.publicUrl.startsWith('https:'),
  });
}

/**
 * For a mailed HTML page shown in a frame of ours. Mail carries its styles inline; with `sandbox` and no source for
 * anything else it can neither run, load, send nor read.
 */
export const mailFrameHeaders = {
  'content-security-policy':
    "default-src 'none'; style-src 'unsafe-inline'; img-src data:; frame-ancestors 'self'; sandbox",
  'x-frame-options': 'SAMEORIGIN',
};
