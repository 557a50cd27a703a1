import { isUtf8 } from 'node:buffer';
import express, { type RequestHandler } from 'express';
import { invalid, unsupported } from '../errors.js';

const DEEPEST = 32;

/**
 * Parses a JSON body. Bytes that are no UTF-8 and nesting over 32 deep are refused before
 * `JSON.parse`, which would take both. `limit` as body-parser writes it: `100kb`.
 */
export function jsonBody(limit: string): RequestHandler {
  return express.json({
    limit,
    strict: true,
    verify: (_request, _response, bytes, charset) => {
      if (charset !== 'utf-8') throw unsupported('Send it as UTF-8 JSON.');
      if (!isUtf8(bytes)) throw invalid('The body is not UTF-8.');
      if (depthOf(bytes) > DEEPEST) throw invalid(`The body is nested over ${DEEPEST} deep.`);
    },
  });
}

/** Deepest nesting of brackets outside of texts. */
export function depthOf(json: Uint8Array): number {
  let depth = 0;
  let deepest = 0;
  let isText = false;
  for (let index = 0; index < json.length; index += 1) {
    const byte = json[index];
    if (isText) {
      if (byte === 0x5c) index += 1;
      else if (byte === 0x22) isText = false;
    } else if (byte === 0x22) isText = true;
    else if (byte === 0x5b || byte === 0x7b) deepest = Math.max(deepest, (depth += 1));
    else if (byte === 0x5d || byte === 0x7d) depth -= 1;
  }
  return deepest;
}
