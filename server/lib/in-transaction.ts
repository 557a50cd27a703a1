import { BaseError, type Sequelize, type Transaction } from 'sequelize';

const DEADLOCK = 1213;
const LOCK_WAIT_TIMEOUT = 1205;
const MOST_TRIES = 6;

/**
 * Runs `act` in one transaction of Sequelize and commits it; after a deadlock or lock wait the
 * whole of it again, six times at most. `act` must not keep anything of an earlier try.
 */
export async function inTransaction<T>(
  sequelize: Sequelize,
  act: (transaction: Transaction) => Promise<T>,
): Promise<T> {
  for (let attempt = 1; ; attempt += 1) {
    try {
      return await sequelize.transaction(act);
    } catch (error) {
      if (!isRetryable(error) || attempt === MOST_TRIES) throw error;
    }
  }
}

function isRetryable(error: unknown): boolean {
  if (!(error instanceof BaseError)) return false;
  const { errno } = (error as { parent?: { errno?: number } }).parent ?? {};
  return errno === DEADLOCK || errno === LOCK_WAIT_TIMEOUT;
}
