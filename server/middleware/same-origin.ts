import type { Request, RequestHandler } from 'express';
import { forbidden } from '../errors.js';

const harmless = new Set(['GET', 'HEAD', 'OPTIONS']);

/**
 * Refuses requests that change something and come from a page of another origin. Without an
 * `Origin` it is no page of another site; with a Bearer token the browser's cookie does not count.
 */
export function sameOrigin(publicUrl: string): RequestHandler {
  const published = new URL(publicUrl).origin;
  return (request, _response, next) => {
    if (harmless.has(request.method) || isBearer(request)) return next();
    const { origin } = request.headers;
    const isOwn =
      origin === undefined || origin === published || hostOf(origin) === hostHeader(request);
    if (!isOwn || request.headers['sec-fetch-site'] === 'cross-site') {
      throw forbidden('This came from a page of another site.');
    }
    next();
  };
}

export const isBearer = (request: Request) =>
  /^bearer\s/i.test(request.headers.authorization ?? '');

function hostOf(origin: string): string | null {
  return URL.canParse(origin) ? new URL(origin).host : null;
}

function hostHeader(request: Request): string {
  return (request.headers.host ?? '').toLowerCase();
}
