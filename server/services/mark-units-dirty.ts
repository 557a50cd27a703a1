import type { Transaction } from 'sequelize';
import { connectionOf, type Runs } from '../lib/connection-of.js';
import { joinSql, sql, word, type Sql } from '../queries/sql.js';

const EVER = new Date(0);
const LATE_LANE = 1;

/** Ids of units, as `SELECT … AS unit_id`. */
export type UnitSelect = Sql;

/**
 * Has the stays, legs and last seen of units folded anew from the beginning, in the late lane.
 * No reads change by that: what units went by stays as it is.
 */
export async function markUnitsDirty(
  either: Transaction | Runs,
  units: readonly number[] | UnitSelect,
): Promise<void> {
  if ('text' in units) return mark(connectionOf(either), units);
  if (units.length === 0) return;
  await mark(connectionOf(either), sql`SELECT id AS unit_id FROM units WHERE id IN (${units})`);
}

async function mark(connection: Runs, units: UnitSelect): Promise<void> {
  const statement = sql`
    INSERT INTO dirty_units (unit_id, from_at, lane)
    SELECT DISTINCT unit_id, ${EVER}, ${LATE_LANE} FROM (${units}) AS concerned
    ON DUPLICATE KEY UPDATE from_at = LEAST(dirty_units.from_at, VALUES(from_at)),
      lane = LEAST(dirty_units.lane, VALUES(lane))`;
  await connection.query(statement.text, statement.values);
}

/** Units that were ever read at or beside a site, stood there or were reported there. */
export function unitsEverAt(siteId: number): UnitSelect {
  return joinSql(
    [
      sql`SELECT p.unit_id FROM read_points rp JOIN passages p ON p.read_point_id = rp.id
          WHERE ${siteId} IN (rp.site_id, rp.decreasing_site_id, rp.increasing_site_id)`,
      sql`SELECT unit_id FROM stays WHERE site_id = ${siteId}`,
      sql`SELECT i.unit_id FROM movement_reports r JOIN identities i ON i.compact = r.unit_compact
          WHERE r.site_id = ${siteId}`,
      sql`SELECT i.unit_id FROM hand_reports r JOIN identities i ON i.compact = r.unit_compact
          WHERE r.site_id = ${siteId}`,
    ],
    'UNION',
  );
}

/** Units that stand at a site now. */
export const unitsStandingAt = (siteId: number): UnitSelect =>
  sql`SELECT unit_id FROM last_seen WHERE stay_site_id = ${siteId}`;

/** Units that were ever seen anywhere. */
export const unitsEverSeen = (): UnitSelect => word('SELECT unit_id FROM unit_folds');

/** Units that were ever read at a read point. */
export const unitsOfPoint = (readPointId: number): UnitSelect =>
  sql`SELECT unit_id FROM passages WHERE read_point_id = ${readPointId}`;
