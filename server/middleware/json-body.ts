import express, { type RequestHandler } from 'express';
import { unsupported } from '../errors.js';
import { decodeUtf8, refuseDeepNesting } from '../ingest/checked-json.js';

/**
 * Parses a JSON body. Bytes that are no UTF-8 and nesting over 32 deep are refused before
 * `JSON.parse`, which would take both. `limit` as body-parser writes it: `100kb`.
 */
export function jsonBody(limit: string): RequestHandler {
  return express.json({
    limit,
    verify: (_request, _response, bytes, charset) => {
      if (charset !== 'utf-8') throw unsupported('Send it as UTF-8 JSON.');
      refuseDeepNesting(decodeUtf8(bytes));
    },
  });
}
