import { INGEST_BOUNDS, type RejectCode } from '../contract/ingest.js';
import { resolveTag, type ResolvedTag } from '../domain/identifiers/resolve-tag.js';
import { parseInstant } from '../contract/parse-instant.js';

/** A read that will be stored; `index` is its place in the request. */
export interface SoundRead {
  index: number;
  antenna: number;
  tag: ResolvedTag;
  readAtMs: number;
  rssi: number | null;
  count: number | null;
}

export interface RejectedRead {
  index: number;
  code: RejectCode;
  detail: string;
}

/** Stands in a list of reads for a line that was no JSON. */
export const NOT_JSON = Symbol('a line that is not JSON');

const MOST_COUNT = 4_294_967_295;
const MOST_RSSI = 9_999;

/** Takes a read as it came apart into its values, or says the first thing that is wrong with it. */
export function judgeRead(raw: unknown, index: number): SoundRead | RejectedRead {
  if (raw === NOT_JSON) return reject(index, 'not-json', 'This line is not JSON.');
  if (typeof raw !== 'object' || raw === null || Array.isArray(raw)) {
    return reject(index, 'not-an-object', 'A read is an object with antenna, tag and readAt.');
  }
  const { antenna, tag, readAt, rssi, count } = raw as Record<string, unknown>;
  if (antenna == null) return reject(index, 'missing-antenna', 'antenna is missing.');
  const trimmed = typeof tag === 'string' ? tag.trim() : tag;
  if (trimmed == null || trimmed === '') return reject(index, 'missing-tag', 'tag is missing.');
  // Each tag is read several times by several antennas: its text is looked through once.
  const known = resolved.get(trimmed as string);
  if (!known && typeof trimmed === 'string' && isTooLong(trimmed)) {
    return reject(index, 'tag-too-long', `tag has more than ${INGEST_BOUNDS.tagBytes} bytes.`);
  }
  if (readAt == null) return reject(index, 'missing-time', 'readAt is missing.');
  const readAtMs = typeof readAt === 'string' ? parseInstant(readAt) : null;
  if (readAtMs === null) return reject(index, 'invalid-time', INVALID_TIME);
  const fault =
    faultOfAntenna(antenna) ?? (known ? null : faultOfTag(trimmed)) ?? faultOfExtras(rssi, count);
  if (fault !== null) return reject(index, 'bad-value', fault);
  return {
    index,
    antenna: antenna as number,
    tag: known ?? resolveNew(trimmed as string, tag as string),
    readAtMs,
    rssi: (rssi ?? null) as number | null,
    count: (count ?? null) as number | null,
  };
}

function reject(index: number, code: RejectCode, detail: string): RejectedRead {
  return { index, code, detail };
}

const MOST_RESOLVED = 20_000;
const resolved = new Map<string, ResolvedTag>();

function resolveNew(trimmed: string, sent: string): ResolvedTag {
  const tag = resolveTag(trimmed);
  if (resolved.size >= MOST_RESOLVED) resolved.clear();
  // A text cut out of a long one keeps all of it in memory.
  if (sent.length <= INGEST_BOUNDS.tagBytes) resolved.set(trimmed, tag);
  return tag;
}

const INVALID_TIME = 'readAt must be an RFC 3339 time with an offset, in the years 1990 to 2100.';

function isTooLong(text: string): boolean {
  const { tagBytes } = INGEST_BOUNDS;
  // No character takes fewer bytes than it takes places, none more than three a place.
  return (
    text.length > tagBytes || (text.length * 3 > tagBytes && Buffer.byteLength(text) > tagBytes)
  );
}

function faultOfAntenna(antenna: unknown): string | null {
  return isWholeNumber(antenna, 1, 255) ? null : 'antenna must be a whole number from 1 to 255.';
}

function faultOfTag(tag: unknown): string | null {
  if (typeof tag !== 'string') return 'tag must be text.';
  return /\p{Surrogate}/u.test(tag) ? 'tag holds half a character.' : null;
}

function faultOfExtras(rssi: unknown, count: unknown): string | null {
  if (rssi != null && !(typeof rssi === 'number' && Math.abs(rssi) <= MOST_RSSI)) {
    return `rssi must be a number from -${MOST_RSSI} to ${MOST_RSSI}.`;
  }
  if (count != null && !isWholeNumber(count, 0, MOST_COUNT)) {
    return 'count must be a whole number, 0 or more.';
  }
  return null;
}

function isWholeNumber(value: unknown, min: number, max: number): value is number {
  return typeof value === 'number' && Number.isInteger(value) && value >= min && value <= max;
}
