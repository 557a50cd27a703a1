import type { Request, RequestHandler, Response } from 'express';
import { unsupported } from '../errors.js';
import { decodeUtf8, parseJson } from '../ingest/checked-json.js';
import { receiveBody } from '../ingest/receive-body.js';

const IDLE_MS = 10_000;

/**
 * Reads a JSON body of `mostBytes` at most. Bytes that are no UTF-8 and deep nesting are refused
 * before `JSON.parse`, which would take both; a body that stops coming is answered 408. Another
 * media type is left to `validate`. `counterOf` gives what is told of bytes as they come, and may
 * refuse them.
 */
export function jsonBody(
  mostBytes: number,
  idleMs = IDLE_MS,
  counterOf?: (request: Request, response: Response) => (bytes: number) => void,
): RequestHandler {
  return async (request, response, next) => {
    if (request.is('json')) {
      requirePlainUtf8(request);
      const bytes = await receiveBody(request, idleMs, mostBytes, counterOf?.(request, response));
      if (bytes.length > 0) request.body = parseJson(decodeUtf8(bytes));
    }
    next();
  };
}

function requirePlainUtf8({ headers }: Request): void {
  const [, charset = 'utf-8'] =
    /;\s*charset="?([^";\s]*)/i.exec(headers['content-type'] ?? '') ?? [];
  const encoding = headers['content-encoding'] ?? 'identity';
  if (!/^utf-?8$/i.test(charset) || encoding.toLowerCase() !== 'identity') {
    throw unsupported('Send it as JSON in UTF-8, not compressed.');
  }
}
