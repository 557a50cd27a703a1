import { parseUnit } from '../domain/identifiers/parse-unit.js';
import type { Database } from '../lib/database.js';
import { loadIdentities, standingOf, type IdentityRow } from './load-equipment.js';
import { ask, sql } from './sql.js';

/** A unit found by its address; `compact` is the identity that it goes by now. */
export interface FoundUnit {
  unitId: number;
  compact: string;
}

/**
 * The unit that a text in an address names: the present holder of that identity, else its last;
 * any form that people write. Narrows nothing. Null when no unit ever had it.
 */
export async function findUnit(db: Database, text: string, now: Date): Promise<FoundUnit | null> {
  const parsed = parseUnit(text);
  const written = /^[A-Z0-9]+$/.test(text) ? [text] : [];
  const compacts = [...written, ...(parsed.kind === 'unit' ? [parsed.identity.compact] : [])];
  if (compacts.length === 0) return null;
  const rows = await ask<IdentityRow>(
    db,
    sql`SELECT id, unit_id, compact, valid_from, valid_to FROM identities
      WHERE compact IN (${compacts})`,
  );
  const exact = rows.filter((row) => row.compact === text);
  const holder = lastHolder(exact.length > 0 ? exact : rows, now);
  if (!holder) return null;
  const identities = await loadIdentities(db, [holder.unit_id], now);
  const [present] = identities.get(holder.unit_id) ?? [];
  return { unitId: holder.unit_id, compact: present?.compact ?? holder.compact };
}

function lastHolder(rows: IdentityRow[], now: Date): IdentityRow | undefined {
  const end = (row: IdentityRow) => row.valid_to?.getTime() ?? Infinity;
  const later = (a: IdentityRow, b: IdentityRow) =>
    end(a) === end(b) ? b.id - a.id : end(b) - end(a);
  return [...rows].sort((a, b) => standingOf(b, now) - standingOf(a, now) || later(a, b))[0];
}
