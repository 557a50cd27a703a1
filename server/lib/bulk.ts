import type { Runs } from './connection-of.js';

/** A value a statement may carry. */
export type SqlValue = string | number | boolean | Date | Buffer | null;

const ROWS_A_STATEMENT = 500;

/**
 * Inserts rows by multi-row statements of at most 500. `update` lists the columns that take the
 * new value where the row is there already, or whole assignments (`at = LEAST(at, VALUES(at))`);
 * with none of them the row that is there stays.
 */
export async function insertRows(
  connection: Runs,
  table: string,
  columns: readonly string[],
  rows: readonly (readonly SqlValue[])[],
  update: readonly string[] = [],
): Promise<void> {
  const kept = `${columns[0]} = ${table}.${columns[0]}`;
  const changes =
    update.map((part) => (part.includes('=') ? part : `${part} = VALUES(${part})`)).join(', ') ||
    kept;
  const places = `(${columns.map(() => '?').join(', ')})`;
  for (const part of inParts(rows, ROWS_A_STATEMENT)) {
    await connection.query(
      `INSERT INTO ${table} (${columns.join(', ')}) VALUES ${part.map(() => places).join(', ')}
       ON DUPLICATE KEY UPDATE ${changes}`,
      part.flat(),
    );
  }
}

/**
 * Runs `statement` with each part of `keys` in place of its `:keys`, the condition given as text
 * per key (joined by OR, which MariaDB turns into ranges; a list of row values it would not).
 */
export async function byKeys<Row>(
  connection: Runs,
  statement: string,
  condition: string,
  keys: readonly (readonly SqlValue[])[],
): Promise<Row[]> {
  const found: Row[] = [];
  for (const part of inParts(keys, ROWS_A_STATEMENT)) {
    const where = part.map(() => `(${condition})`).join(' OR ');
    const rows = await connection.query<Row[]>(statement.replace(':keys', where), part.flat());
    if (Array.isArray(rows)) for (const row of rows) found.push(row);
  }
  return found;
}

/** `items` in parts of at most `size`. */
export function inParts<T>(items: readonly T[], size: number): T[][] {
  const parts: T[][] = [];
  for (let from = 0; from < items.length; from += size) parts.push(items.slice(from, from + size));
  return parts;
}
