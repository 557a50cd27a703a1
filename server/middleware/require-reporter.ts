import type { Request, RequestHandler } from 'express';
import { Problem } from '../errors.js';
import { findReporter, type Reporter } from '../ingest/find-reporter.js';
import { bearerToken } from '../lib/access-token.js';
import type { Context } from '../lib/context.js';
import { asGuard } from './guard.js';

const reporters = new WeakMap<Request, Reporter>();

/** Lets only requests with a valid token of an organisation pass: `Authorization: Bearer <token>`. */
export function requireReporter({ db }: Pick<Context, 'db'>): RequestHandler {
  return asGuard(async (request, _response, next) => {
    const token = bearerToken(request.headers.authorization);
    const reporter = token === undefined ? null : await findReporter(db, token);
    if (!reporter) {
      throw new Problem(401, 'Nobody signed in', "Send an organisation's valid token.", [], {
        'WWW-Authenticate': 'Bearer',
      });
    }
    reporters.set(request, reporter);
    next();
  });
}

/** The organisation that `requireReporter` let pass; throws where that was not asked. */
export function reporterOf(request: Request): Reporter {
  const reporter = reporters.get(request);
  if (!reporter) throw new Error('This route is not guarded by requireReporter.');
  return reporter;
}
