import type { Database } from '../lib/database.js';
import { isAdministrator, type Actor } from '../policies/actor.js';
import { unitIdsWithin, unitSourcesOf, workSitesOf } from './narrow-units.js';
import { ask, joinSql, sql, type Sql } from './sql.js';

/**
 * How much of a unit a person sees. `siteIds` null: its whole history; else the facts of these
 * sites. `isListed`: it stands in their lists now.
 */
export interface UnitAccess {
  siteIds: number[] | null;
  isListed: boolean;
}

/**
 * Which of the units the person may open, and how much of each: those of their lists, and any
 * that was once at a site where they work. Units that are not in the answer do not exist for them.
 */
export async function findOpenableUnits(
  db: Database,
  actor: Actor,
  unitIds: readonly number[],
): Promise<Map<number, UnitAccess>> {
  const access = new Map<number, UnitAccess>();
  if (unitIds.length === 0) return access;
  const siteIds = workSitesOf(actor);
  const selects = [
    ...unitSourcesOf(actor).map((source) => {
      const seesAll = source.table === 'visible_units' || source.siteIds === null ? 1 : 0;
      const ids = unitIdsWithin([source], sql`s.unit_id IN (${unitIds})`);
      return sql`SELECT w.unit_id, ${seesAll} AS sees_all, 1 AS is_listed FROM (${ids}) w`;
    }),
    ...(siteIds.length > 0 && !isAdministrator(actor) ? onceThere(unitIds, siteIds) : []),
  ];
  if (selects.length === 0) return access;
  const rows = await ask<{ unit_id: number; sees_all: number; is_listed: number }>(
    db,
    joinSql(selects, 'UNION'),
  );
  for (const row of rows) {
    const known = access.get(row.unit_id);
    access.set(row.unit_id, {
      siteIds: row.sees_all === 1 || known?.siteIds === null ? null : siteIds,
      isListed: row.is_listed === 1 || Boolean(known?.isListed),
    });
  }
  return access;
}

/** True for read points `rp`, or another name, that stand at, or open into, one of the sites. */
export const readPointOfSites = (siteIds: readonly number[], rp: Sql = sql`rp`): Sql => sql`(
  ${rp}.site_id IN (${siteIds}) OR ${rp}.decreasing_site_id IN (${siteIds})
  OR ${rp}.increasing_site_id IN (${siteIds}))`;

function onceThere(unitIds: readonly number[], siteIds: readonly number[]): Sql[] {
  return [
    sql`SELECT st.unit_id, 0, 0 FROM stays st
      WHERE st.unit_id IN (${unitIds}) AND st.site_id IN (${siteIds})`,
    sql`SELECT p.unit_id, 0, 0 FROM passages p JOIN read_points rp ON rp.id = p.read_point_id
      WHERE p.unit_id IN (${unitIds}) AND ${readPointOfSites(siteIds)}`,
  ];
}
