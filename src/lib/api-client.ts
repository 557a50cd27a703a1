import { ApiProblem, noAnswer, readProblem } from './api-problem';
import { waitForSignIn } from './session-gate';

type QueryValue = string | number | boolean | null | undefined;

interface Options {
  query?: Record<string, QueryValue>;
  body?: unknown;
  signal?: AbortSignal;
  /** Set by sign-in itself: a 401 is then the answer, not a session that ended. */
  anonymous?: boolean;
}

/** Query string with its question mark; empty, null and undefined values are left out. */
export function queryString(query: Record<string, QueryValue> = {}): string {
  const parameters = new URLSearchParams();
  for (const [name, value] of Object.entries(query)) {
    if (value != null && value !== '') parameters.set(name, String(value));
  }
  const written = parameters.toString();
  return written ? `?${written}` : '';
}

async function send(method: string, path: string, options: Options): Promise<Response> {
  const init: RequestInit = {
    method,
    credentials: 'same-origin',
    headers: { accept: 'application/json' },
  };
  if (options.signal) init.signal = options.signal;
  if (options.body !== undefined) {
    init.headers = { accept: 'application/json', 'content-type': 'application/json' };
    init.body = JSON.stringify(options.body);
  }
  try {
    return await fetch(path + queryString(options.query), init);
  } catch (error) {
    if (options.signal?.aborted) throw error;
    throw noAnswer();
  }
}

/**
 * Sends one request and gives the JSON of a success (undefined for 204), else throws `ApiProblem`.
 * A session that ended holds the request until the person has signed in again, then sends it once more.
 */
export async function request<T>(method: string, path: string, options: Options = {}): Promise<T> {
  let response = await send(method, path, options);
  if (response.status === 401 && !options.anonymous) {
    await waitForSignIn(options.signal);
    response = await send(method, path, options);
  }
  if (!response.ok) throw await readProblem(response);
  return (response.status === 204 ? undefined : await response.json()) as T;
}

/** Reads; see `request`. */
export const get = <T>(path: string, query?: Options['query'], signal?: AbortSignal): Promise<T> =>
  request<T>('GET', path, { ...(query && { query }), ...(signal && { signal }) });

/** True for an error that another try cannot mend. */
export const isFinal = (error: unknown): boolean =>
  error instanceof ApiProblem && error.status >= 400 && error.status < 500 && error.status !== 429;
