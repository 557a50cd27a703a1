import { unavailable } from '../errors.js';
import { isDatabaseAway, isDatabaseUnable } from '../lib/database-away.js';

/**
 * Runs `act`; a failure that says that the database is away, busy or full becomes a 503 problem, so
 * that the reader keeps its reads and sends them again. All other failures pass as they are.
 */
export async function asUnavailable<T>(act: () => Promise<T>): Promise<T> {
  try {
    return await act();
  } catch (error) {
    if (!isDatabaseAway(error) && !isDatabaseUnable(error)) throw error;
    throw unavailable('The database cannot take them now. Keep the reads and send them again.');
  }
}
