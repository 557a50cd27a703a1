import type { WatchKind } from '../contract/watches.js';
import type { StoredScope } from '../models/watch.js';
import type { Actor } from '../policies/actor.js';
import { factsInSight } from './narrow-facts.js';
import { unitIdsWithin, unitSourcesOf } from './narrow-units.js';
import { joinSql, sql, type Sql } from './sql.js';

/** What decides whether a car belongs to a watch and when it is too long. */
export interface WatchRule {
  kind: WatchKind;
  scope: StoredScope;
  includeOnHand: boolean;
  hours: number;
}

/**
 * A watch as pieces of SQL over `last_seen ls`, `units u` and, for dwell, a stay `st`.
 * `covered`: in scope, and the person may see it. `raises`: too long now. `lasts`: what an alert
 * was raised for still goes on, also while a departure is provisional.
 */
export interface WatchedUnits {
  /** Each unit once, with its last stay. */
  from: Sql;
  /** For joining to `alerts a` by `ofAlert`: each unit with any stay that an alert may be about. */
  fromLasting: Sql;
  ofAlert: Sql;
  siteId: Sql;
  since: Sql;
  atLeast: Sql;
  covered: Sql;
  raises: Sql;
  lasts: Sql;
}

const UNITS = sql`last_seen ls JOIN units u ON u.id = ls.unit_id`;

/** Kinds that stand still or fall silent by trade, so nobody is told unless they ask. */
const LEFT_OUT = ['locomotive', 'endOfTrain'];

/** Translates a watch, seen with the eyes of `actor` at `now`, into pieces of SQL. */
export function watchedUnits(rule: WatchRule, actor: Actor, now: Date): WatchedUnits {
  const limit = new Date(now.getTime() - rule.hours * 3_600_000);
  return rule.kind === 'quiet'
    ? quietUnits(rule, actor, limit)
    : standingUnits(rule, actor, now, limit);
}

function quietUnits(rule: WatchRule, actor: Actor, limit: Date): WatchedUnits {
  const covered = allOf([
    ...scopeConditions(rule.scope, sql`ls.site_id`),
    sql`u.id IN (${unitIdsWithin(unitSourcesOf(actor))})`,
    // A stranger that once passed is silent for good; only one asked for by number is missed.
    ...(rule.scope.unitIds ? [] : [sql`u.registered = 1`]),
  ]);
  const silent = allOf([
    covered,
    sql`ls.state <> 'unseen'`,
    sql`ls.at <= ${limit}`,
    ...(rule.includeOnHand ? [] : [sql`ls.state <> 'onHand'`]),
  ]);
  return {
    from: UNITS,
    fromLasting: UNITS,
    ofAlert: sql`ls.unit_id = a.unit_id AND ls.at <= a.raised_at`,
    siteId: sql`ls.site_id`,
    since: sql`ls.at`,
    atLeast: sql`0`,
    covered,
    raises: silent,
    lasts: silent,
  };
}

function standingUnits(rule: WatchRule, actor: Actor, now: Date, limit: Date): WatchedUnits {
  const since = sql`COALESCE(st.arrived_at, st.first_seen_at)`;
  const inScope = allOf([
    ...scopeConditions(rule.scope, sql`st.site_id`),
    // A car that has crossed into the next yard, which may yet be struck, still stands here.
    factsInSight(actor, sql`u.id`, sql`st.site_id`),
    sql`st.out_of_dwell = 0`,
  ]);
  const tooLong = sql`${since} <= ${limit}`;
  const isHere = sql`(st.departed_at IS NULL OR st.departure_final_at > ${now})`;
  return {
    from: sql`${UNITS} JOIN stays st ON st.unit_id = ls.unit_id
      AND st.first_seen_at = ls.stay_first_seen_at AND st.site_id = ls.stay_site_id`,
    fromLasting: sql`${UNITS} JOIN stays st ON st.unit_id = ls.unit_id`,
    ofAlert: sql`ls.unit_id = a.unit_id AND st.site_id = a.site_id AND ${since} <= a.raised_at`,
    siteId: sql`st.site_id`,
    since,
    atLeast: sql`st.arrived_at IS NULL`,
    covered: allOf([inScope, isHere]),
    raises: allOf([
      inScope,
      tooLong,
      sql`st.departed_at IS NULL`,
      sql`(st.arrival_final_at IS NULL OR st.arrival_final_at <= ${now})`,
    ]),
    lasts: allOf([inScope, tooLong, isHere]),
  };
}

function scopeConditions(scope: StoredScope, siteId: Sql): Sql[] {
  const { unitIds, marks, kinds, ownerIds, siteIds } = scope;
  const leftOut = (kinds ?? unitIds) ? [] : [sql`u.kind NOT IN (${LEFT_OUT})`];
  return [
    ...leftOut,
    ...(kinds ? [sql`u.kind IN (${kinds})`] : []),
    ...(unitIds ? [sql`u.id IN (${unitIds})`] : []),
    ...(ownerIds ? [sql`u.owner_id IN (${ownerIds})`] : []),
    ...(siteIds ? [sql`${siteId} IN (${siteIds})`] : []),
    ...(marks
      ? [
          sql`EXISTS (SELECT 1 FROM identities i
            WHERE i.unit_id = u.id AND i.valid_to IS NULL AND i.mark IN (${marks}))`,
        ]
      : []),
  ];
}

function allOf(conditions: Sql[]): Sql {
  return conditions.length === 0 ? sql`TRUE` : joinSql(conditions, 'AND');
}
