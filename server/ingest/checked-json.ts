import { INGEST_BOUNDS } from '../contract/ingest.js';
import { invalid } from '../errors.js';

/** Decodes UTF-8; throws a 400 problem for bytes that are none. A byte order mark is dropped. */
export function decodeUtf8(bytes: Uint8Array): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw invalid('The body is not UTF-8.');
  }
}

/** Parses JSON whose nesting is within bounds; throws a 400 problem for all else. */
export function parseJson(text: string): unknown {
  refuseDeepNesting(text);
  try {
    return JSON.parse(text) as unknown;
  } catch {
    throw invalid('The body is not JSON.');
  }
}

const QUOTE = 34;
const BACKSLASH = 92;

/** Throws a 400 problem when lists and objects stand too deep in each other. Reads no further. */
export function refuseDeepNesting(text: string): void {
  let depth = 0;
  for (let at = 0; at < text.length; at += 1) {
    const code = text.charCodeAt(at);
    if (code === QUOTE) at = endOfString(text, at);
    else if (code === 91 || code === 123) depth += 1;
    else if (code === 93 || code === 125) depth -= 1;
    if (depth > INGEST_BOUNDS.depth) {
      throw invalid(`The body is nested more than ${INGEST_BOUNDS.depth} deep.`);
    }
  }
}

/** Place of the quote that ends the string which begins at `start`; the end of the text if none. */
function endOfString(text: string, start: number): number {
  let end = text.indexOf('"', start + 1);
  while (end !== -1 && isEscaped(text, end)) end = text.indexOf('"', end + 1);
  return end === -1 ? text.length : end;
}

function isEscaped(text: string, at: number): boolean {
  let backslashes = 0;
  while (text.charCodeAt(at - 1 - backslashes) === BACKSLASH) backslashes += 1;
  return backslashes % 2 === 1;
}
