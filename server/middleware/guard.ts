import type { RequestHandler } from 'express';

const guards = new WeakSet<object>();

/** Marks a handler as one that lets nobody pass unknown; the walk over the router looks for it. */
export function asGuard(handler: RequestHandler): RequestHandler {
  guards.add(handler);
  return handler;
}

export const isGuard = (handler: object) => guards.has(handler);
