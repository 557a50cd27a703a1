import type { PoolConnection } from 'mariadb';
import type { Transaction } from 'sequelize';

/** What can run a statement: a connection, or the pool. */
export type Runs = Pick<PoolConnection, 'query'>;

/**
 * The connection to run plain SQL on: the one given, or that of a Sequelize transaction, so that
 * the statements are part of it. Whole numbers beyond 32 bits come as BigInt from the latter.
 */
export function connectionOf(either: Transaction | Runs): Runs {
  if ('query' in either) return either;
  // Sequelize keeps the connection on each transaction, but not in its type.
  return (either as Transaction & { connection: Runs }).connection;
}
