import { isAdministrator, worksAtSites, type Actor } from '../policies/actor.js';
import { joinSql, sql, type Sql } from './sql.js';

/**
 * A table, or the slice of one, whose rows are units that somebody may list. Both tables have
 * unit_id, at, state, site_id, quiet_at and limit_at. `siteIds` null: every site.
 */
export type UnitSource =
  | { table: 'visible_units'; organisationId: number }
  | { table: 'last_seen'; siteIds: number[] | null };

/**
 * The one place that says whose units a person sees in lists, counts, map and events: an owner
 * those of the organisation, a clerk or dispatcher those on hand at or last gone out of their
 * sites, an administrator all. Several roles see the union; none sees nothing (empty).
 */
export function unitSourcesOf(actor: Actor): UnitSource[] {
  if (isAdministrator(actor)) return [{ table: 'last_seen', siteIds: null }];
  const sources: UnitSource[] = [];
  if (actor.roles.includes('owner') && actor.organisationId !== null) {
    sources.push({ table: 'visible_units', organisationId: actor.organisationId });
  }
  const siteIds = workSitesOf(actor);
  if (siteIds.length > 0) sources.push({ table: 'last_seen', siteIds });
  return sources;
}

/** Sites whose facts the person sees by working there; empty for others. */
export function workSitesOf(actor: Actor): number[] {
  return worksAtSites(actor) ? [...actor.siteIds] : [];
}

/** True for rows, called `s`, of the source that the person may see; null: all of the table. */
export function conditionOf(source: UnitSource): Sql | null {
  if (source.table === 'visible_units') return sql`s.org_id = ${source.organisationId}`;
  return source.siteIds === null ? null : sql`s.site_id IN (${source.siteIds})`;
}

/** A select of the unit ids that the sources hold, each once. */
export function unitIdsWithin(sources: readonly UnitSource[], further: Sql = sql`TRUE`): Sql {
  const selects = sources.map((source) => {
    const condition = conditionOf(source) ?? sql`TRUE`;
    const from = source.table === 'visible_units' ? sql`visible_units s` : sql`last_seen s`;
    return sql`SELECT s.unit_id FROM ${from} WHERE ${condition} AND ${further}`;
  });
  return selects.length === 0
    ? sql`SELECT 0 AS unit_id FROM DUAL WHERE FALSE`
    : joinSql(selects, 'UNION');
}

/** True where a count of zero at this site means none, not that the person may not know. */
export function seesSite(sources: readonly UnitSource[], siteId: number): boolean {
  return sources.some(
    (source) =>
      source.table === 'visible_units' ||
      source.siteIds === null ||
      source.siteIds.includes(siteId),
  );
}
