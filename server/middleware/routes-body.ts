import type { ErrorRequestHandler, Request, RequestHandler } from 'express';
import { Problem } from '../errors.js';
import { pointerOf } from '../lib/pointer.js';

type Fields = Record<string, unknown>;

/** Where the parts of a sorted body came from: `/edges/0` was `/3`. */
const origins = new WeakMap<Request, Map<string, string>>();

/**
 * Takes nodes and edges one or many, as they are, and sorts them into `{ nodes, edges }`; what has
 * ends is an edge. A body that has that form already passes untouched.
 */
export const sortRoutesBody: RequestHandler = (request, _response, next) => {
  const body = request.body as unknown;
  const isOne = isFields(body) && ('from' in body || 'code' in body);
  if (Array.isArray(body) || isOne) {
    const sorted: { nodes: unknown[]; edges: unknown[] } = { nodes: [], edges: [] };
    const from = new Map<string, string>();
    const items = Array.isArray(body) ? (body as unknown[]) : [body];
    items.forEach((item, index) => {
      const part = isFields(item) && 'from' in item ? 'edges' : 'nodes';
      from.set(pointerOf([part, sorted[part].length]), isOne ? '' : pointerOf([index]));
      sorted[part].push(item);
    });
    origins.set(request, from);
    request.body = sorted;
  }
  next();
};

/** Points the faults of a sorted body at where they were in the body that came. */
export const restorePointers: ErrorRequestHandler = (error: unknown, request, _response, next) => {
  const from = origins.get(request);
  if (!from || !(error instanceof Problem)) return next(error);
  const { status, title, detail, headers } = error;
  const faults = error.errors.map((fault) => ({
    ...fault,
    pointer: restored(fault.pointer, from),
  }));
  next(new Problem(status, title, detail, faults, headers));
};

function restored(pointer: string, from: Map<string, string>): string {
  const [, start = '', rest = ''] = /^(\/\w+\/\d+)(.*)$/.exec(pointer) ?? [];
  const origin = from.get(start);
  return origin === undefined ? pointer : `${origin}${rest}`;
}

function isFields(value: unknown): value is Fields {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
