import type { Database } from '../lib/database.js';
import { loadIdentities } from './load-equipment.js';
import { ask, sql } from './sql.js';

/** What a unit is called now. */
export interface UnitName {
  /** Compact identity, as in addresses. */
  unitId: string;
  display: string;
}

/** The identity each unit carries at `now`, else its last; by unit id, in one query. */
export async function unitNames(
  db: Database,
  unitIds: readonly number[],
  now: Date,
): Promise<Map<number, UnitName>> {
  const identities = await loadIdentities(db, [...new Set(unitIds)], now);
  const names = new Map<number, UnitName>();
  for (const [unitId, [present]] of identities) {
    if (present) names.set(unitId, { unitId: present.compact, display: present.display });
  }
  return names;
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
  const rows = await ask<HolderRow>(
    db,
    sql`SELECT compact, unit_id FROM identities WHERE compact IN (${[...new Set(compacts)]})
        ORDER BY compact,
          (valid_from IS NULL OR valid_from <= ${now}) AND (valid_to IS NULL OR valid_to > ${now}),
          valid_from`,
  );
  return new Map(rows.map((row) => [row.compact, row.unit_id] as const));
}
