/** One fault of an input; `pointer` is a JSON pointer into the body, '' for the whole. */
export interface Fault {
  pointer: string;
  detail: string;
}

interface ProblemFields {
  status: number;
  title: string;
  detail: string | null;
  requestId: string | null;
  faults: Fault[];
  retryAfterSeconds: number | null;
}

/** Any answer that is not a success. Status 0: no answer came at all. */
export class ApiProblem extends Error implements ProblemFields {
  readonly status: number;
  readonly title: string;
  readonly detail: string | null;
  readonly requestId: string | null;
  readonly faults: Fault[];
  readonly retryAfterSeconds: number | null;

  constructor(fields: ProblemFields) {
    super(fields.detail ?? fields.title);
    this.name = 'ApiProblem';
    this.status = fields.status;
    this.title = fields.title;
    this.detail = fields.detail;
    this.requestId = fields.requestId;
    this.faults = fields.faults;
    this.retryAfterSeconds = fields.retryAfterSeconds;
  }
}

const text = (value: unknown): string | null => (typeof value === 'string' ? value : null);

const readFaults = (value: unknown): Fault[] =>
  Array.isArray(value)
    ? value.map((entry: { pointer?: unknown; detail?: unknown }) => ({
        pointer: text(entry.pointer) ?? '',
        detail: text(entry.detail) ?? '',
      }))
    : [];

/** Reads an RFC 9457 document; a body that is none still gives a problem with the status. */
export async function readProblem(response: Response): Promise<ApiProblem> {
  const body = (await response.json().catch(() => ({}))) as Record<string, unknown>;
  const retryAfter = Number(response.headers.get('retry-after'));
  return new ApiProblem({
    status: response.status,
    title: text(body.title) ?? (response.statusText || `The server answered ${response.status}.`),
    detail: text(body.detail),
    requestId: text(body.requestId) ?? response.headers.get('x-request-id'),
    faults: readFaults(body.errors),
    retryAfterSeconds: retryAfter > 0 ? retryAfter : null,
  });
}

/** The problem of a request that got no answer. */
export function noAnswer(): ApiProblem {
  return new ApiProblem({
    status: 0,
    title: 'No answer from Fishplate.',
    detail: null,
    requestId: null,
    faults: [],
    retryAfterSeconds: null,
  });
}
