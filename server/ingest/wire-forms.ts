import { INGEST_BOUNDS, readsEnvelope } from '../contract/ingest.js';
import { invalid, tooLarge } from '../errors.js';
import { decodeUtf8, parseJson, refuseDeepNesting } from './checked-json.js';
import { NOT_JSON } from './judge-read.js';

/** What a body holds: `site` when it names one, and its reads, each still to be judged. */
export interface WireReads {
  site: string | undefined;
  reads: unknown[];
}

/** `{ "site": …, "reads": [ … ] }`. Throws problems 400 and 413. */
export function readsOfJson(bytes: Uint8Array): WireReads {
  const envelope = readsEnvelope.safeParse(parseJson(decodeUtf8(bytes)));
  if (!envelope.success) {
    const faults = envelope.error.issues.map((issue) => ({
      pointer: issue.path.map((step) => `/${String(step)}`).join(''),
      detail: issue.message,
    }));
    throw invalid('The body must be an object with a list of reads.', faults);
  }
  return { site: envelope.data.site, reads: bounded(envelope.data.reads) };
}

/** One read a line; empty lines do not count. Throws problems 400 and 413. */
export function readsOfNdjson(bytes: Uint8Array): unknown[] {
  const lines = decodeUtf8(bytes).split('\n');
  return bounded(lines.filter((line) => line.trim() !== '')).map(readOfLine);
}

function readOfLine(line: string): unknown {
  refuseDeepNesting(line);
  try {
    return JSON.parse(line) as unknown;
  } catch {
    return NOT_JSON;
  }
}

function bounded<T>(reads: T[]): T[] {
  if (reads.length <= INGEST_BOUNDS.reads) return reads;
  throw tooLarge(`${reads.length} reads; at most ${INGEST_BOUNDS.reads} go in one request.`);
}
