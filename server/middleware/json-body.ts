import type { Request, RequestHandler } from 'express';
import { unsupported } from '../errors.js';
import { decodeUtf8, parseJson } from '../ingest/checked-json.js';
import { receiveBody } from '../ingest/receive-body.js';

const IDLE_MS = 10_000;

/**
 * Reads a JSON body of `mostBytes` at most. Bytes that are no UTF-8 and deep nesting are refused
 * before `JSON.parse`, which would take both; a body that stops coming is answered 408. Another
 * media type is left to `validate`.
 */
export function jsonBody(mostBytes: number, idleMs = IDLE_MS): RequestHandler {
  return async (request, _response, next) => {
    if (request.is('json')) {
      requirePlainUtf8(request);
      const bytes = await receiveBody(request, idleMs, mostBytes);
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
