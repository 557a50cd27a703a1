import type { Database } from '../lib/database.js';
import { ask, sql, word } from './sql.js';

/** A part of the ledger's reads: those before `before` that no earlier one holds. */
export interface Partition {
  name: string;
  /** Null: the last one, without an end. */
  before: Date | null;
}

/** The parts that the ledger's reads are kept in, oldest first. */
export async function readsPartitions(db: Database): Promise<Partition[]> {
  const rows = await ask<{ name: string; bound: string }>(
    db,
    sql`SELECT partition_name AS name, partition_description AS bound
        FROM information_schema.partitions
        WHERE table_schema = DATABASE() AND table_name = 'reads'
        ORDER BY partition_ordinal_position`,
  );
  return rows.map(({ name, bound }) => ({ name, before: dateOf(bound) }));
}

/** How many reads a part holds; counts no further than `most`. */
export async function countReads(db: Database, { name }: Partition, most: number): Promise<number> {
  const [row] = await ask<{ count: number }>(
    db,
    sql`SELECT COUNT(*) AS count
        FROM (SELECT 1 FROM \`reads\` PARTITION (${word(name)}) LIMIT ${most}) AS some`,
  );
  return row?.count ?? 0;
}

/** MariaDB gives the bound as it would be written: `'2026-03-01'`, or MAXVALUE. */
function dateOf(bound: string): Date | null {
  const text = /^'(.+)'$/.exec(bound)?.[1];
  return text === undefined ? null : new Date(`${text.slice(0, 10)}T00:00:00Z`);
}
