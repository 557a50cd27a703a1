import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/** Sides of antennas, looked up by site and number; null for one that is no longer there. */
export type AntennaSides = (siteId: number, number: number) => 'left' | 'right' | null;

/** Sides of all antennas of the sites. One statement, none for no sites. */
export async function loadAntennaSides(
  db: Database,
  siteIds: readonly number[],
): Promise<AntennaSides> {
  if (siteIds.length === 0) return () => null;
  const rows = await ask<{ site_id: number; number: number; side: 'left' | 'right' }>(
    db,
    sql`SELECT site_id, number, side FROM antennas WHERE site_id IN (${[...new Set(siteIds)]})`,
  );
  const sides = new Map(rows.map((row) => [`${row.site_id} ${row.number}`, row.side]));
  return (siteId, number) => sides.get(`${siteId} ${number}`) ?? null;
}
