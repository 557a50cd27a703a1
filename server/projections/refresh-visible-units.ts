import type { PoolConnection } from 'mariadb';
import { insertRows } from '../lib/bulk.js';
import { LAST_SEEN_COLUMNS, unseenValues } from './history-rows.js';

const NO_ONE = 0;

/**
 * Brings last seen and visibility in line with the register for the given units: registered ones
 * that no reader has seen get their `unseen` row, the owner sees the unit and nobody else does.
 * Units with a history are folded again, since their kind may have changed.
 */
export async function refreshVisibleUnits(
  connection: PoolConnection,
  unitIds: readonly number[],
): Promise<void> {
  if (unitIds.length === 0) return;
  const registered = await connection.query<{ id: number }[]>(
    'SELECT id FROM units WHERE id IN (?) AND registered = 1',
    [unitIds],
  );
  const rows = registered.map(({ id }) => unseenValues(id));
  await insertRows(connection, 'last_seen', LAST_SEEN_COLUMNS, rows);
  await connection.query(
    `DELETE v FROM visible_units v JOIN units u ON u.id = v.unit_id
     WHERE v.unit_id IN (?) AND (u.registered = 0 OR v.org_id <> COALESCE(u.owner_id, ?))`,
    [unitIds, NO_ONE],
  );
  await connection.query(
    `INSERT INTO visible_units (org_id, unit_id, at, state, site_id, quiet_at, limit_at)
     SELECT u.owner_id, l.unit_id, l.at, l.state, COALESCE(l.site_id, 0), l.quiet_at, l.limit_at
     FROM last_seen l JOIN units u ON u.id = l.unit_id
     WHERE l.unit_id IN (?) AND u.registered = 1 AND u.owner_id IS NOT NULL
     ON DUPLICATE KEY UPDATE at = VALUES(at), state = VALUES(state), site_id = VALUES(site_id),
       quiet_at = VALUES(quiet_at), limit_at = VALUES(limit_at)`,
    [unitIds],
  );
  await connection.query(
    `INSERT INTO dirty_units (unit_id, from_at)
     SELECT unit_id, '1970-01-01' FROM last_seen WHERE unit_id IN (?) AND state <> 'unseen'
     ON DUPLICATE KEY UPDATE from_at = LEAST(dirty_units.from_at, VALUES(from_at))`,
    [unitIds],
  );
}
