import type { RequestHandler } from 'express';
import helmet from 'helmet';

/** Headers of every answer: nothing but our own origin may run, be framed by, or be asked. */
export function securityHeaders(options: { https: boolean }): RequestHandler {
  return helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'self'"],
        scriptSrc: ["'self'"],
        styleSrc: ["'self'"],
        imgSrc: ["'self'", 'data:'],
        connectSrc: ["'self'"],
        objectSrc: ["'none'"],
        frameAncestors: ["'none'"],
        baseUri: ["'none'"],
        formAction: ["'self'"],
      },
    },
    strictTransportSecurity: options.https,
    // Both headers only make sense where the browser trusts the address.
    crossOriginOpenerPolicy: options.https,
    originAgentCluster: options.https,
    referrerPolicy: { policy: 'no-referrer' },
    xFrameOptions: { action: 'deny' },
  });
}
