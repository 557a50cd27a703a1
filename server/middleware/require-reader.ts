import type { Request, RequestHandler } from 'express';
import { Problem } from '../errors.js';
import { findReader, type Reader } from '../ingest/find-reader.js';
import { bearerToken } from '../lib/access-token.js';
import type { Context } from '../lib/context.js';
import { asGuard } from './guard.js';

const readers = new WeakMap<Request, Reader>();

/** Lets only requests with a valid reader token pass: `Authorization: Bearer <token>`. */
export function requireReader({ db }: Pick<Context, 'db'>): RequestHandler {
  return asGuard(async (request, _response, next) => {
    const token = bearerToken(request.headers.authorization);
    const reader = token === undefined ? null : await findReader(db, token);
    if (!reader) {
      throw new Problem(401, 'No reader signed in', 'Send a valid reader token.', [], {
        'WWW-Authenticate': 'Bearer',
      });
    }
    readers.set(request, reader);
    next();
  });
}

/** The reader that `requireReader` let pass; throws where that was not asked. */
export function readerOf(request: Request): Reader {
  const reader = readers.get(request);
  if (!reader) throw new Error('This route is not guarded by requireReader.');
  return reader;
}
