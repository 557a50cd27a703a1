import type { ErrorRequestHandler, Request, RequestHandler } from 'express';
import {
  ForeignKeyConstraintError,
  OptimisticLockError,
  TimeoutError,
  UniqueConstraintError,
} from 'sequelize';
import type { Logger } from 'pino';
import { conflict, invalid, notFound, Problem, unavailable } from '../errors.js';
import { isDatabaseAway, isDatabaseUnable } from '../lib/database-away.js';

/** Answers a path of the interface that no route has taken. */
export const unknownPath: RequestHandler = () => {
  throw notFound('There is nothing at this address.');
};

/**
 * Sends whatever was thrown as an RFC 9457 problem. What nobody foresaw is logged whole and
 * answered 500 with nothing but the request id.
 */
export function problemHandler(logger: Logger): ErrorRequestHandler {
  return (error: unknown, request, response, next) => {
    const problem = problemFrom(error);
    if (problem.status >= 500) {
      logger.error({ err: error, requestId: requestIdOf(request) }, 'request failed');
    }
    if (response.headersSent) {
      next(error);
      return;
    }
    response.status(problem.status).set(problem.headers);
    response.set('Cache-Control', 'no-store').type('application/problem+json');
    response.send(JSON.stringify(documentOf(problem, request)));
  };
}

function documentOf(problem: Problem, request: Request) {
  return {
    type: 'about:blank',
    title: problem.title,
    status: problem.status,
    detail: problem.detail,
    instance: request.originalUrl.split('?')[0],
    requestId: requestIdOf(request),
    ...(problem.errors.length > 0 ? { errors: problem.errors } : {}),
  };
}

function requestIdOf(request: Request): string {
  return request.id as string;
}

/** The problem for a thrown value; by class or code, never by message text. */
export function problemFrom(error: unknown): Problem {
  if (error instanceof Problem) return error;
  return problemOfDatabase(error) ?? problemOfRouter(error) ?? unforeseen;
}

const unforeseen = new Problem(
  500,
  'Something went wrong here',
  'It is our fault, not yours, and it has been written down. Nothing of this request was kept. Quote the request id.',
);

function problemOfDatabase(error: unknown): Problem | null {
  if (isDatabaseAway(error)) return unavailable('The database cannot be reached. Try again soon.');
  if (error instanceof UniqueConstraintError) {
    return conflict('Somebody else has just stored the same thing. Look again.');
  }
  if (error instanceof ForeignKeyConstraintError) {
    return conflict('Something else refers to this, or what this refers to is gone.');
  }
  if (error instanceof OptimisticLockError) {
    return conflict('Somebody else has changed this meanwhile. Look again.');
  }
  if (error instanceof TimeoutError || isDatabaseUnable(error)) {
    return unavailable('The database cannot do this now. Try again soon.');
  }
  return null;
}

/** The router and the file server throw errors with a `status` of 4xx for what they cannot read. */
function problemOfRouter(error: unknown): Problem | null {
  const { status } = (error ?? {}) as { status?: unknown };
  if (typeof status !== 'number' || status < 400 || status >= 500) return null;
  return status === 404
    ? notFound('There is nothing at this address.')
    : invalid('The request cannot be read.');
}
