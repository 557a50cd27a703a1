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
 * Units that a text in an address names: the present holder of that identity first, then who held
 * it last; any form that people write. Narrows nothing, so that whoever asks takes the first that
 * they may open.
 */
export async function findUnits(db: Database, text: string, now: Date): Promise<FoundUnit[]> {
  const parsed = parseUnit(text);
  const written = /^[A-Z0-9]+$/.test(text) ? [text] : [];
  const compacts = [...written, ...(parsed.kind === 'unit' ? [parsed.identity.compact] : [])];
  if (compacts.length === 0) return [];
  const rows = await ask<IdentityRow>(
    db,
    sql`SELECT id, unit_id, compact, valid_from, valid_to FROM identities
      WHERE compact IN (${compacts})`,
  );
  const exact = rows.filter((row) => row.compact === text);
  const holders = (exact.length > 0 ? exact : rows).sort((a, b) => compareHolders(a, b, now));
  const unitIds = [...new Set(holders.map((row) => row.unit_id))];
  const identities = await loadIdentities(db, unitIds, now);
  return unitIds.flatMap((unitId) => {
    const [present] = identities.get(unitId) ?? [];
    return present ? [{ unitId, compact: present.compact }] : [];
  });
}

/** Of several that hold now the one that began last, as reads are resolved; else who held last. */
function compareHolders(a: IdentityRow, b: IdentityRow, now: Date): number {
  const begin = (row: IdentityRow) => row.valid_from?.getTime() ?? 0;
  const end = (row: IdentityRow) => row.valid_to?.getTime() ?? 0;
  const [standingA, standingB] = [standingOf(a, now), standingOf(b, now)];
  if (standingA !== standingB) return standingB - standingA;
  return standingA === 2 ? begin(b) - begin(a) || a.id - b.id : end(b) - end(a) || b.id - a.id;
}
