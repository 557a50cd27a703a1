import type { Request, RequestHandler } from 'express';
import { z } from 'zod';
import { tooLarge } from '../errors.js';
import { MOST_ITEMS } from '../contract/administration.js';
import type { Batch } from '../lib/batch.js';
import { validate, validated } from './validate.js';

/** Checks a body that holds one `item` or a list of them; over `most` of them are 413. */
export function validateBatch(item: z.ZodType, most: number = MOST_ITEMS): RequestHandler {
  const one = validate({ body: item });
  const list = validate({ body: z.array(item).min(1) });
  return (request, response, next) => {
    const body = request.body as unknown;
    if (!Array.isArray(body)) return one(request, response, next);
    if (body.length > most) throw tooLarge(`At most ${most} of them come in one request.`);
    return list(request, response, next);
  };
}

/** The checked items of a request that went through `validateBatch(item)`. */
export function batchOf<T extends z.ZodType>(request: Request, _item: T): Batch<z.output<T>> {
  const { body } = validated<{ body: z.ZodUnknown }>(request);
  const isList = Array.isArray(request.body);
  return { isList, items: (isList ? body : [body]) as z.output<T>[] };
}
