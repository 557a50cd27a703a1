import { unavailable } from '../errors.js';
import { isDatabaseAway } from '../lib/database-away.js';

/** MariaDB's numbers for: not now (no room, too many connections, locks held, read only). */
const NOT_NOW = new Set([1021, 1040, 1114, 1205, 1213, 1226, 1290, 1836]);

/**
 * Runs `act`; a failure that says that the database is away or busy becomes a 503 problem, so
 * that the reader keeps its reads and sends them again. All other failures pass as they are.
 */
export async function asUnavailable<T>(act: () => Promise<T>): Promise<T> {
  try {
    return await act();
  } catch (error) {
    const { errno } = error as { errno?: number };
    if (!isDatabaseAway(error) && !NOT_NOW.has(errno ?? 0)) throw error;
    throw unavailable('The database does not answer. Keep the reads and send them again.');
  }
}
