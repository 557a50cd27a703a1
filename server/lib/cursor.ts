import type { z } from 'zod';
import { invalid } from '../errors.js';

/** Makes the opaque `next` of a page: base64url of JSON. */
export function writeCursor(value: unknown): string {
  return Buffer.from(JSON.stringify(value), 'utf8').toString('base64url');
}

/** Reads a cursor that a list gave; anything else is refused with 400 at `?cursor`. */
export function readCursor<T extends z.ZodType>(
  text: string | undefined,
  schema: T,
): z.output<T> | null {
  if (text === undefined) return null;
  const parsed = schema.safeParse(parseJson(Buffer.from(text, 'base64url').toString('utf8')));
  if (parsed.success) return parsed.data;
  throw invalid('The cursor is not one that this list gave.', [
    { pointer: '?cursor', detail: 'is not one that this list gave' },
  ]);
}

/** Cuts the row too many that tells whether there is a next page. */
export function pageFrom<T>(
  rows: T[],
  limit: number,
  cursorOf: (last: T) => unknown,
): { rows: T[]; next: string | null } {
  const shown = rows.slice(0, limit);
  const last = shown.at(-1);
  const next = rows.length > limit && last !== undefined ? writeCursor(cursorOf(last)) : null;
  return { rows: shown, next };
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return undefined;
  }
}
