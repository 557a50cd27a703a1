import type { Database } from '../lib/database.js';

/** Notes when these watches were last evaluated. */
export async function markEvaluated(db: Database, watchIds: number[], at: Date): Promise<void> {
  if (watchIds.length === 0) return;
  await db.pool.query('UPDATE watches SET evaluated_at = ? WHERE id IN (?)', [at, watchIds]);
}
