import type { RequestHandler } from 'express';
import { notFound } from '../errors.js';
import type { Context } from '../lib/context.js';

/** Lets requests pass in the demo alone; elsewhere there is nothing at the address. */
export function onlyInDemo({ env }: Pick<Context, 'env'>): RequestHandler {
  return (_request, _response, next) => {
    if (!env.demo) throw notFound('There is nothing at this address.');
    next();
  };
}
