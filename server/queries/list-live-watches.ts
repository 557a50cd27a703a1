import type { Database } from '../lib/database.js';
import { ask, sql } from './sql.js';

/** Every watch that has not ended, or only the one given, and who set it. */
export function listLiveWatches(
  db: Database,
  id?: number,
): Promise<{ id: number; personId: number }[]> {
  return ask<{ id: number; personId: number }>(
    db,
    sql`SELECT id, person_id AS personId FROM watches WHERE ended_at IS NULL AND ${id === undefined ? sql`TRUE` : sql`id = ${id}`} ORDER BY id`,
  );
}
