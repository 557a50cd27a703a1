import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/** Ids of mails that wait for their next try, or whose sender has fallen silent; oldest first. */
export async function findDueMail(db: Database, now: Date, limit: number): Promise<number[]> {
  const rows = await ask<{ id: number }>(
    db,
    sql`(SELECT id FROM outbox WHERE state = 'pending' AND next_try_at <= ${now}
          ORDER BY next_try_at, id LIMIT ${limit})
        UNION ALL
        (SELECT id FROM outbox WHERE state = 'sending' AND claim_expires_at <= UTC_TIMESTAMP(3)
          ORDER BY next_try_at, id LIMIT ${limit})
        LIMIT ${limit}`,
  );
  return rows.map((row) => row.id);
}
