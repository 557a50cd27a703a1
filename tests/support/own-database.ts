import { afterAll } from 'vitest';
import { openDatabase, type Database } from '../../server/lib/database.js';
import { useEmptyDatabase } from './database.js';
import { migrate } from './migrations.js';

/** A migrated database that a test file may bend out of shape, gone after the file. */
export async function useOwnDatabase(name: string): Promise<Database> {
  const database = openDatabase(await useEmptyDatabase(name));
  afterAll(() => database.close());
  await migrate(database.sequelize);
  return database;
}
