import type { PoolConnection } from 'mariadb';
import { openDatabase, type Database } from '../../server/lib/database.js';
import { testDatabaseUrl } from './database.js';

/** A database of its own whose connections can be made to break in mid-transaction. */
export interface FusedDatabase extends Database {
  /** The server ends the connection just before the n-th statement from now inside transactions; 0: never. */
  burnAfter(statements: number): void;
  /** How often that happened. */
  readonly burnt: number;
}

/** Opens the worker's database for something that is to lose its connection; `killer` ends it. */
export function openFused(killer: Database): FusedDatabase {
  const database = openDatabase(testDatabaseUrl(), { connections: 4 });
  const fuse = { left: 0, burnt: 0 };
  const wired = new WeakSet<PoolConnection>();
  const take = database.pool.getConnection.bind(database.pool);
  database.pool.getConnection = async () => {
    const connection = await take();
    if (!wired.has(connection)) wire(connection, killer, fuse);
    wired.add(connection);
    return connection;
  };
  return {
    ...database,
    burnAfter: (statements) => (fuse.left = statements),
    get burnt() {
      return fuse.burnt;
    },
  };
}

function wire(
  connection: PoolConnection,
  killer: Database,
  fuse: { left: number; burnt: number },
): void {
  let inTransaction = false;
  const query = connection.query.bind(connection);
  const begin = connection.beginTransaction.bind(connection);
  const commit = connection.commit.bind(connection);
  const rollback = connection.rollback.bind(connection);
  connection.beginTransaction = async () => {
    await begin();
    inTransaction = true;
  };
  connection.commit = async () => {
    await commit();
    inTransaction = false;
  };
  connection.rollback = async () => {
    inTransaction = false;
    await rollback();
  };
  connection.query = async (sql: string, values?: unknown) => {
    if (inTransaction && fuse.left > 0) {
      fuse.left -= 1;
      if (fuse.left === 0) {
        await killer.pool.query('KILL CONNECTION ?', [connection.threadId]);
        fuse.burnt += 1;
      }
    }
    return query(sql, values);
  };
}
