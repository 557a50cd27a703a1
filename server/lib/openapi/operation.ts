import type { z } from 'zod';

/** Who may call a route: anybody, a signed-in person, or the holder of one of the tokens. */
export type OperationAccess = 'public' | 'session' | 'reader' | 'reporter' | 'metrics';

/**
 * One route as the interface document tells it. `path` is the whole path in Express form
 * (`/api/sites/:code`). Give the same schemas that `validate` is given.
 */
export interface Operation {
  method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  path: string;
  /** One line, starting with a verb. */
  summary: string;
  /** The heading it stands under; the second part of the path when absent. */
  tag?: string;
  /** `session` when absent. */
  access?: OperationAccess;
  params?: z.ZodObject;
  query?: z.ZodObject;
  body?: z.ZodType;
  /** Media type of the body; JSON when absent. */
  bodyType?: string;
  /** 200, or 204 without a response schema, when absent. */
  status?: number;
  response?: z.ZodType;
  /** Media type of the answer; JSON when absent. */
  responseType?: string;
}
