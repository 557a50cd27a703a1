import type { Actor } from '../policies/actor.js';
import { watchesOf } from './find-watches.js';
import { unitIdsWithin, unitSourcesOf } from './narrow-units.js';
import { joinSql, sql, type Sql } from './sql.js';

/**
 * True for rows of `alerts a` about cars that the person may see now. For clerks and dispatchers
 * it goes by the site of the alert, not by where the car is now: what they were told about their
 * site stays theirs when the car has left.
 */
export function alertsInSight(actor: Actor): Sql {
  const conditions = unitSourcesOf(actor).map((source) => {
    if (source.table === 'visible_units') return sql`a.unit_id IN (${unitIdsWithin([source])})`;
    return source.siteIds === null ? sql`TRUE` : sql`a.site_id IN (${source.siteIds})`;
  });
  return conditions.length === 0 ? sql`FALSE` : sql`(${joinSql(conditions, 'OR')})`;
}

/** True for rows of `alerts a` joined with `watches w` that are this person's business. */
export function alertsOf(actor: Actor): Sql {
  return sql`${watchesOf(actor)} AND ${alertsInSight(actor)}`;
}
