import { INGEST_BOUNDS } from '../contract/ingest.js';
import { invalid } from '../errors.js';
import { Faults } from '../lib/faults.js';
import { pointerOf } from '../lib/pointer.js';

/** Decodes UTF-8; throws a 400 problem for bytes that are none. A byte order mark is dropped. */
export function decodeUtf8(bytes: Uint8Array): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw invalid('The body is not UTF-8.');
  }
}

/**
 * Parses JSON whose nesting is within bounds; throws a 400 problem for all else. So is an object
 * with a field that comes twice: of two lists of reads the parser would drop one.
 */
export function parseJson(text: string): unknown {
  const outermost: string[] = [];
  refuseDeepNesting(text, (start, end) => {
    if (isKey(text, end)) outermost.push(text.slice(start, end));
  });
  let value: unknown;
  let keys: string[];
  try {
    value = JSON.parse(text);
    keys = outermost.map((key) => JSON.parse(key) as string);
  } catch {
    throw invalid('The body is not JSON.');
  }
  refuseRepeats(keys);
  return value;
}

const MOST_REPEATS_TOLD = 100;

function refuseRepeats(keys: string[]): void {
  const seen = new Set<string>();
  const repeated = new Set(keys.filter((key) => seen.size === seen.add(key).size));
  const faults = new Faults();
  for (const key of [...repeated].slice(0, MOST_REPEATS_TOLD)) {
    faults.add(pointerOf([key]), 'is given twice');
  }
  faults.refuse();
}

function isKey(text: string, end: number): boolean {
  let at = end;
  while (' \t\r\n'.includes(text[at] ?? 'x')) at += 1;
  return text[at] === ':';
}

const QUOTE = 34;
const BACKSLASH = 92;

/**
 * Throws a 400 problem when lists and objects stand too deep in each other. Reads no further.
 * Tells of each text of the outermost list or object where it starts and where it is over.
 */
export function refuseDeepNesting(
  text: string,
  onOutermost: (start: number, end: number) => void = () => undefined,
): void {
  let depth = 0;
  for (let at = 0; at < text.length; at += 1) {
    const code = text.charCodeAt(at);
    if (code === QUOTE) {
      const start = at;
      at = endOfString(text, at);
      if (depth === 1) onOutermost(start, at + 1);
    } else if (code === 91 || code === 123) depth += 1;
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
