import type { SqlValue } from '../lib/bulk.js';

/** True when a stored row already has the values that would be written. */
export function isSame(columns: readonly string[], row: object, values: readonly SqlValue[]) {
  return columns.every((column, index) => {
    const had = plain((row as Record<string, unknown>)[column]);
    return had === plain(values[index]);
  });
}

function plain(value: unknown): unknown {
  if (value instanceof Date) return value.getTime();
  if (Buffer.isBuffer(value)) return value.toString();
  if (typeof value === 'boolean') return Number(value);
  return value;
}
