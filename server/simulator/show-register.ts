import { withTransaction, type Database } from '../lib/database.js';
import { refreshVisibleUnits } from '../projections/refresh-visible-units.js';

const CHUNK = 500;

/**
 * Seeders write the register alone; here its units get the rows that show them as never read,
 * as the register's service would have written. Units that have such rows are left alone.
 */
export async function showRegister({ pool }: Database): Promise<void> {
  for (;;) {
    const rows = await pool.query<{ id: number }[]>(
      `SELECT u.id FROM units u LEFT JOIN last_seen l ON l.unit_id = u.id
        WHERE u.registered = 1 AND l.unit_id IS NULL LIMIT ?`,
      [CHUNK],
    );
    if (rows.length === 0) return;
    const ids = rows.map(({ id }) => id);
    await withTransaction(pool, (connection) => refreshVisibleUnits(connection, ids));
  }
}
