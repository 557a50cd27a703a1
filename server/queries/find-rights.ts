import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/**
 * What each of the sessions, of those that still stand, gives a right to, as one text: when it
 * changes, what was narrowed by it before no longer holds. One statement.
 */
export async function findRights(
  db: Database,
  sessionIds: readonly string[],
  now: Date,
): Promise<Map<string, string>> {
  if (sessionIds.length === 0) return new Map();
  const rows = await ask<{ id: string; rights: string }>(
    db,
    sql`SELECT se.id, CONCAT_WS(' ', p.roles, COALESCE(p.organisation_id, '-'),
        COALESCE(GROUP_CONCAT(ps.site_id ORDER BY ps.site_id), '-')) AS rights
      FROM sessions se JOIN people p ON p.id = se.person_id
      LEFT JOIN person_sites ps ON ps.person_id = p.id
      WHERE se.id IN (${sessionIds}) AND se.ended_at IS NULL AND se.expires_at > ${now}
      GROUP BY se.id`,
  );
  return new Map(rows.map((row) => [row.id, row.rights]));
}
