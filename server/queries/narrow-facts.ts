import type { Actor } from '../policies/actor.js';
import { unitIdsWithin, unitSourcesOf } from './narrow-units.js';
import { joinSql, sql, type Sql } from './sql.js';

/**
 * True for facts about a unit at a site that the person may see: an owner's by the unit; of those
 * who work at sites by the site of the fact, wherever the unit is now. What happened in their yard
 * stays theirs when the car has left.
 */
export function factsInSight(actor: Actor, unitId: Sql, siteId: Sql): Sql {
  const conditions = unitSourcesOf(actor).map((source) => {
    if (source.table === 'visible_units') return sql`${unitId} IN (${unitIdsWithin([source])})`;
    return source.siteIds === null ? sql`TRUE` : sql`${siteId} IN (${source.siteIds})`;
  });
  return conditions.length === 0 ? sql`FALSE` : sql`(${joinSql(conditions, 'OR')})`;
}
