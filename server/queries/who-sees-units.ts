import type { Database } from '../lib/database.js';
import { loadIdentities } from './load-equipment.js';
import type { UnitSource } from './narrow-units.js';
import { ask, sql } from './sql.js';

/** Who may be told of a change to some units, found once for any number of people. */
export interface UnitAudience {
  /** Compact identity by unit id. */
  names: ReadonlyMap<number, string>;
  /** Organisations that see the unit. */
  organisations: ReadonlyMap<number, ReadonlySet<number>>;
  /** The site whose people see it. */
  sites: ReadonlyMap<number, number | null>;
}

/** Names of the units and who may see them now. Three statements, whatever the number of units. */
export async function findAudience(
  db: Database,
  unitIds: readonly number[],
  now: Date,
): Promise<UnitAudience> {
  const [identities, visible, lastSeen] = await Promise.all([
    loadIdentities(db, unitIds, now),
    ask<{ unit_id: number; org_id: number }>(
      db,
      sql`SELECT unit_id, org_id FROM visible_units
        WHERE org_id IN (SELECT id FROM organisations) AND unit_id IN (${unitIds})`,
    ),
    ask<{ unit_id: number; site_id: number | null }>(
      db,
      sql`SELECT unit_id, site_id FROM last_seen WHERE unit_id IN (${unitIds})`,
    ),
  ]);
  const organisations = new Map<number, Set<number>>();
  for (const { unit_id, org_id } of visible) {
    organisations.set(unit_id, (organisations.get(unit_id) ?? new Set()).add(org_id));
  }
  const names = [...identities].flatMap(([unitId, [present]]) =>
    present ? [[unitId, present.compact] as const] : [],
  );
  return {
    names: new Map(names),
    organisations,
    sites: new Map(lastSeen.map((row) => [row.unit_id, row.site_id])),
  };
}

/** The same rule as for lists, in memory; `leftSites` are sites that units were at until now. */
export function isInAudience(
  audience: UnitAudience,
  leftSites: ReadonlyMap<number, number>,
  sources: readonly UnitSource[],
  unitId: number,
): boolean {
  return sources.some((source) => {
    if (source.table === 'visible_units') {
      return audience.organisations.get(unitId)?.has(source.organisationId) ?? false;
    }
    if (source.siteIds === null) return true;
    const sites = [audience.sites.get(unitId), leftSites.get(unitId)];
    return source.siteIds.some((siteId) => sites.includes(siteId));
  });
}
