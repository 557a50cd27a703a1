import mariadb, { type Connection } from 'mariadb';
import { afterAll, beforeEach, inject } from 'vitest';
import { openDatabase, type Database } from '../../server/lib/database.js';
import { migrate } from './migrations.js';

const MOST_WORKERS = 32;
let claimed: { url: string; holder: Connection; emptying: string } | undefined;

/**
 * Takes a database that no other worker holds, and migrates it when it is new. The claim is a
 * lock of a connection that ends with this worker.
 */
export async function claimDatabase(): Promise<void> {
  if (claimed) return;
  const holder = await connect(inject('mariadbUrl'));
  for (let slot = 1; slot <= MOST_WORKERS; slot += 1) {
    const name = `fishplate_test_${slot}`;
    const [row] = await holder.query<{ got: number }[]>('SELECT GET_LOCK(?, 0) AS got', [name]);
    if (row?.got !== 1) continue;
    await holder.query(`CREATE DATABASE IF NOT EXISTS ${name} CHARACTER SET utf8mb4`);
    await holder.query(`USE ${name}`);
    const url = `${inject('mariadbUrl')}${name}`;
    await migrateDatabase(url);
    claimed = { url, holder, emptying: await emptyingStatements(holder, name) };
    return;
  }
  throw new Error(`All ${MOST_WORKERS} test databases are taken.`);
}

/**
 * The worker's own migrated database, emptied before each test and closed after the file. The
 * configuration's version only ever grows, as in life: caches that outlive a test notice.
 */
export function useTestDatabase(): Database {
  const database = openDatabase(testDatabaseUrl());
  beforeEach(emptyTestDatabase);
  afterAll(() => database.close());
  return database;
}

/** Address of the worker's own database, for a process that a test starts. */
export function testDatabaseUrl(): string {
  if (!claimed) throw new Error('Only tests of the projects db and browser have a database.');
  return claimed.url;
}

/** Deletes every row of the worker's database; what migrations wrote stays. */
export async function emptyTestDatabase(): Promise<void> {
  if (!claimed) throw new Error('Only tests of the projects db and browser have a database.');
  await claimed.holder.query(claimed.emptying);
}

/** A further database without tables, dropped after the file; for tests of migrations and of start. */
export async function useEmptyDatabase(name: string): Promise<string> {
  if (!claimed) throw new Error('Only tests of the projects db and browser have a database.');
  const { holder } = claimed;
  await holder.query(`CREATE DATABASE ${name} CHARACTER SET utf8mb4`);
  afterAll(() => holder.query(`DROP DATABASE ${name}`));
  return `${inject('mariadbUrl')}${name}`;
}

async function migrateDatabase(url: string): Promise<void> {
  const database = openDatabase(url, { connections: 1 });
  try {
    await migrate(database.sequelize);
  } finally {
    await database.close();
  }
}

async function emptyingStatements(holder: Connection, name: string): Promise<string> {
  const tables = await holder.query<{ table_name: string }[]>(
    `SELECT table_name AS table_name FROM information_schema.tables
      WHERE table_schema = ? AND table_type = 'BASE TABLE'
        AND table_name NOT IN ('SequelizeMeta', 'config_state')`,
    [name],
  );
  return [
    'SET foreign_key_checks = 0',
    ...tables.map((table) => `DELETE FROM \`${table.table_name}\``),
    'SET foreign_key_checks = 1',
    'UPDATE config_state SET version = version + 1, frozen_before = NULL WHERE id = 1',
  ].join('; ');
}

function connect(url: string): Promise<Connection> {
  const { hostname, port, username, password } = new URL(url);
  return mariadb.createConnection({
    host: hostname,
    port: Number(port),
    user: username,
    password,
    multipleStatements: true,
  });
}
