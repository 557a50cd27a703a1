import { setTimeout as pause } from 'node:timers/promises';
import type { Database } from '../lib/database.js';

const LOCK_WAIT_TIMEOUT = 1205;

/** How often to try, and how long to leave the table to others in between. */
export interface Patience {
  tries: number;
  pauseMs: number;
}

const USUAL_PATIENCE: Patience = { tries: 3, pauseMs: 2_000 };

/**
 * Changes the partitions of the ledger's reads; false when somebody had the table open all the
 * while. It waits a second at most, for as long as it waits nobody else gets at the table.
 */
export async function alterReads(
  db: Database,
  change: string,
  { tries, pauseMs }: Patience = USUAL_PATIENCE,
): Promise<boolean> {
  for (let attempt = 1; ; attempt += 1) {
    try {
      await db.pool.query(`ALTER TABLE \`reads\` WAIT 1 ${change}`);
      return true;
    } catch (error) {
      if ((error as { errno?: number }).errno !== LOCK_WAIT_TIMEOUT) throw error;
      if (attempt === tries) return false;
      await pause(pauseMs);
    }
  }
}
