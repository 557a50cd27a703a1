import type { FleetSummary } from '../contract/fleet.js';
import type { Database } from '../lib/database.js';
import { unitIdsWithin, type UnitSource } from './narrow-units.js';
import { ask, sql, type Sql } from './sql.js';

const DAY_MS = 86_400_000;

export interface FleetCounts {
  total: number;
  onHand: number;
  enRoute: number;
  unseen: number;
  quiet: number;
  pastLimit: number;
  readLast24h: number;
}

export interface OldestRow {
  unit_id: number;
  since: Date;
  site_code: string;
  site_name: string;
}

/** Counts over the sources, each unit once, each count along its own index. One statement. */
export async function countFleet(
  db: Database,
  sources: readonly UnitSource[],
  now: Date,
): Promise<FleetCounts> {
  const count = (further: Sql) =>
    sql`(SELECT COUNT(*) FROM (${unitIdsWithin(sources, further)}) c)`;
  const dayAgo = new Date(now.getTime() - DAY_MS);
  const [row] = await ask<FleetCounts>(
    db,
    sql`SELECT ${count(sql`s.state = 'onHand'`)} AS onHand,
      ${count(sql`s.state = 'enRoute'`)} AS enRoute, ${count(sql`s.state = 'unseen'`)} AS unseen,
      ${count(quietAmong(now))} AS quiet, ${count(sql`s.limit_at <= ${now}`)} AS pastLimit,
      ${count(sql`s.at > ${dayAgo}`)} AS readLast24h`,
  );
  const counts = row ?? {
    onHand: 0,
    enRoute: 0,
    unseen: 0,
    quiet: 0,
    pastLimit: 0,
    readLast24h: 0,
  };
  return { ...counts, total: counts.onHand + counts.enRoute + counts.unseen };
}

/** Which kinds of things the actor has to do with: an owner of cars alone is told of cars. */
export async function kindsHeld(
  db: Database,
  sources: readonly UnitSource[],
): Promise<FleetSummary['holds']> {
  const [source, ...others] = sources;
  if (source?.table !== 'visible_units' || others.length > 0) return { cars: true, boxes: true };
  const owned = (kinds: Sql) => sql`EXISTS (SELECT 1 FROM units
    WHERE owner_id = ${source.organisationId} AND kind IN (${kinds}) AND registered = 1)`;
  const [row] = await ask<{ cars: number; boxes: number }>(
    db,
    sql`SELECT ${owned(sql`'car', 'locomotive', 'endOfTrain', 'other'`)} AS cars,
      ${owned(sql`'container', 'trailer', 'chassis', 'generatorSet'`)} AS boxes`,
  );
  return { cars: Boolean(row?.cars), boxes: Boolean(row?.boxes) };
}

/** Of the units past their limit the one that has stood longest; null when there is none. */
export async function findOldestPastLimit(
  db: Database,
  sources: readonly UnitSource[],
  now: Date,
): Promise<OldestRow | null> {
  const past = unitIdsWithin(sources, sql`s.limit_at <= ${now}`);
  const [row] = await ask<OldestRow>(
    db,
    sql`SELECT l.unit_id, COALESCE(l.arrived_at, l.stay_first_seen_at, l.at) AS since,
        st.code AS site_code, st.name AS site_name
      FROM (${past}) c JOIN last_seen l ON l.unit_id = c.unit_id JOIN sites st ON st.id = l.site_id
      ORDER BY since, l.unit_id LIMIT 1`,
  );
  return row ?? null;
}

/** Strangers are never quiet: nobody here waits for them. */
export const quietAmong = (now: Date): Sql => sql`s.quiet_at <= ${now}
  AND EXISTS (SELECT 1 FROM units u WHERE u.id = s.unit_id AND u.registered = 1)`;
