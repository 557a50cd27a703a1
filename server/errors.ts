/** One fault of the input: a JSON pointer to it and what is wrong, in words. */
export interface ProblemFault {
  pointer: string;
  detail: string;
}

/** What a route refuses with; sent as RFC 9457 `application/problem+json`. */
export class Problem extends Error {
  constructor(
    readonly status: number,
    readonly title: string,
    readonly detail: string,
    readonly errors: ProblemFault[] = [],
    readonly headers: Record<string, string> = {},
  ) {
    super(`${status} ${title}: ${detail}`);
    this.name = 'Problem';
  }
}

export const invalid = (detail: string, errors: ProblemFault[] = []) =>
  new Problem(400, 'The request is not valid', detail, errors);

export const unauthenticated = (detail = 'Sign in first.') =>
  new Problem(401, 'Not signed in', detail);

export const forbidden = (detail = 'You may see this but not do that.') =>
  new Problem(403, 'Not allowed', detail);

export const notFound = (detail = 'There is nothing here that you may see.') =>
  new Problem(404, 'Not found', detail);

/** The connection closes with it: what may still come of the body must not pass for a request. */
export const timedOut = (detail: string) =>
  new Problem(408, 'The request came too slowly', detail, [], { Connection: 'close' });

export const conflict = (detail: string, errors: ProblemFault[] = []) =>
  new Problem(409, 'Not as things stand', detail, errors);

export const tooLarge = (detail: string) => new Problem(413, 'Too large', detail);

export const unsupported = (detail: string) => new Problem(415, 'Wrong media type', detail);

/** `retryAfterSeconds` goes out as the Retry-After header, rounded up. */
export const tooMany = (detail: string, retryAfterSeconds: number) =>
  new Problem(429, 'Too many requests', detail, [], {
    'Retry-After': String(Math.max(1, Math.ceil(retryAfterSeconds))),
  });

export const unavailable = (detail: string) =>
  new Problem(503, 'Not available at the moment', detail, [], { 'Retry-After': '2' });
