import type { Actor } from '../policies/actor.js';
import { watchesOf } from './find-watches.js';
import { factsInSight } from './narrow-facts.js';
import { sql, type Sql } from './sql.js';

/** True for rows of `alerts a` about what the person may see now. */
export function alertsInSight(actor: Actor): Sql {
  return factsInSight(actor, sql`a.unit_id`, sql`a.site_id`);
}

/** True for rows of `alerts a` joined with `watches w` that are this person's business. */
export function alertsOf(actor: Actor): Sql {
  return sql`${watchesOf(actor)} AND ${alertsInSight(actor)}`;
}
