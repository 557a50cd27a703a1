import type { Database } from '../lib/database.js';

/** What a unit is called now. */
export interface UnitName {
  /** Compact identity, as in addresses. */
  unitId: string;
  display: string;
}

interface NameRow {
  unit_id: number;
  compact: string;
  display: string;
}

/** The identity each unit carries at `now`, else its last; by unit id, in one query. */
export async function unitNames(
  db: Database,
  unitIds: number[],
  now: Date,
): Promise<Map<number, UnitName>> {
  if (unitIds.length === 0) return new Map();
  const rows = await db.pool.query<NameRow[]>(
    `SELECT unit_id, compact, display FROM identities WHERE unit_id IN (?)
      ORDER BY unit_id,
        (valid_from IS NULL OR valid_from <= ?) AND (valid_to IS NULL OR valid_to > ?),
        valid_from`,
    [[...new Set(unitIds)], now, now],
  );
  return new Map(
    rows.map((row) => [row.unit_id, { unitId: row.compact, display: row.display }] as const),
  );
}

interface HolderRow {
  compact: string;
  unit_id: number;
}

/** The unit that holds each compact identity at `now`, else its last holder; in one query. */
export async function unitsByIdentity(
  db: Database,
  compacts: string[],
  now: Date,
): Promise<Map<string, number>> {
  if (compacts.length === 0) return new Map();
  const rows = await db.pool.query<HolderRow[]>(
    `SELECT compact, unit_id FROM identities WHERE compact IN (?)
      ORDER BY compact,
        (valid_from IS NULL OR valid_from <= ?) AND (valid_to IS NULL OR valid_to > ?),
        valid_from`,
    [[...new Set(compacts)], now, now],
  );
  return new Map(rows.map((row) => [row.compact, row.unit_id] as const));
}
