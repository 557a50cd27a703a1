import type { Request, RequestHandler } from 'express';
import { z } from 'zod';
import { notFound, unsupported, type ProblemFault } from '../errors.js';
import { Faults } from '../lib/faults.js';
import { pointerOf } from '../lib/pointer.js';
import { describeIssue } from './describe-issue.js';

/** The schemas of a request; what is not given is not read, save that no query is then allowed. */
export interface RequestSchemas {
  params?: z.ZodObject;
  query?: z.ZodObject;
  body?: z.ZodType;
}

/** What a request holds once its schemas have passed it. */
export type Validated<S extends RequestSchemas> = {
  [Part in keyof S]: S[Part] extends z.ZodType ? z.output<S[Part]> : undefined;
};

const passed = new WeakMap<Request, object>();

/**
 * Checks a request against its schemas and names every fault at once: body faults by JSON
 * pointer, query faults as `?name`. An address that cannot name anything is 404. Unknown query
 * parameters are refused, unknown keys of the body left out.
 */
export function validate(schemas: RequestSchemas): RequestHandler {
  const querySchema = (schemas.query ?? z.object({})).strict();
  return (request, _response, next) => {
    const params = schemas.params?.safeParse(request.params);
    if (params && !params.success) throw notFound();
    if (schemas.body) requireJson(request);
    const query = querySchema.safeParse(request.query, { error: describeIssue });
    const body = schemas.body?.safeParse(request.body, { error: describeIssue });
    const faults = new Faults();
    for (const { pointer, detail } of [
      ...(query.error?.issues.flatMap(queryFaults) ?? []),
      ...(body?.error?.issues.map(bodyFault) ?? []),
    ]) {
      faults.add(pointer, detail);
    }
    faults.refuse();
    passed.set(request, {
      ...passed.get(request),
      query: query.data,
      ...(params && { params: params.data }),
      ...(body && { body: body.data }),
    });
    next();
  };
}

/** The checked parts of a request that went through `validate(schemas)`. */
export function validated<S extends RequestSchemas>(request: Request, _schemas?: S): Validated<S> {
  const parts = passed.get(request);
  if (!parts) throw new Error('This route reads its input without validate().');
  return parts as Validated<S>;
}

function requireJson(request: Request): void {
  const hasBody =
    request.headers['transfer-encoding'] !== undefined ||
    Number(request.headers['content-length'] ?? 0) > 0;
  if (hasBody && !request.is('json')) {
    throw unsupported('Send it as application/json.');
  }
}

function bodyFault(issue: z.core.$ZodIssue): ProblemFault {
  return { pointer: pointerOf(issue.path), detail: issue.message };
}

function queryFaults(issue: z.core.$ZodIssue): ProblemFault[] {
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => ({ pointer: `?${key}`, detail: 'is not known here' }));
  }
  return [{ pointer: `?${String(issue.path[0] ?? '')}`, detail: issue.message }];
}
