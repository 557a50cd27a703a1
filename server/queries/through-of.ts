import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/** A stay whose two ends were read, in ms. */
export interface EndedStay {
  first_seen_at: Date;
  site_id: number;
  arrived_at: Date | null;
  departed_at: Date | null;
}

interface SharedRow {
  arrived_at: Date;
  came: number;
  left_together: number;
}

/** Of those that came in one train, at least so many left in one: then they only passed through. */
const SHARE = 0.8;

/**
 * Which of a unit's stays were a train passing through: at least 80 % of the pass in, by units,
 * left in the unit's pass out. By the instant of arrival (ms), for stays that both ends were read
 * of; reckoned when asked, so that it is never out of date. One statement.
 */
export async function throughOf(
  db: Database,
  unitId: number,
  stays: readonly EndedStay[],
): Promise<Map<number, boolean>> {
  const ended = stays.filter((stay) => stay.arrived_at && stay.departed_at);
  const through = new Map<number, boolean>();
  if (ended.length === 0) return through;
  const rows = await ask<SharedRow>(
    db,
    sql`SELECT st.arrived_at,
        (SELECT COUNT(*) FROM passages m WHERE m.read_point_id = i.read_point_id
          AND m.pass_started_at = i.pass_started_at AND m.pass_ordinal = i.pass_ordinal) AS came,
        (SELECT COUNT(*) FROM passages m JOIN passages o ON o.read_point_id = d.read_point_id
            AND o.pass_started_at = d.pass_started_at AND o.pass_ordinal = d.pass_ordinal
            AND o.unit_id = m.unit_id AND o.role = 'crossing'
          WHERE m.read_point_id = i.read_point_id AND m.pass_started_at = i.pass_started_at
            AND m.pass_ordinal = i.pass_ordinal) AS left_together
      FROM stays st
        JOIN passages i ON i.unit_id = st.unit_id AND i.first_at = st.arrived_at
          AND i.role = 'crossing'
        JOIN passages d ON d.unit_id = st.unit_id AND d.role = 'crossing'
          AND d.first_at > i.first_at AND d.first_at <= st.departed_at
          AND d.last_at >= st.departed_at
      WHERE st.unit_id = ${unitId} AND st.arrival_basis = 'read' AND st.departure_basis = 'read'
        AND st.arrived_at IN (${ended.map((stay) => stay.arrived_at)})`,
  );
  for (const { arrived_at: at, came, left_together: left } of rows) {
    through.set(at.getTime(), left >= came * SHARE);
  }
  return through;
}
