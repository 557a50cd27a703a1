import type { RequestHandler } from 'express';

/** Answers about cars and people are kept by no cache. */
export const noStore: RequestHandler = (_request, response, next) => {
  response.set('Cache-Control', 'no-store');
  next();
};
