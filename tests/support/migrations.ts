import { readdirSync } from 'node:fs';
import { createRequire } from 'node:module';
import path from 'node:path';
import { DataTypes, QueryTypes, Sequelize, type QueryInterface } from 'sequelize';

interface Migration {
  up(queryInterface: QueryInterface, sequelize: typeof Sequelize): Promise<void>;
  down(queryInterface: QueryInterface, sequelize: typeof Sequelize): Promise<void>;
}

const directory = path.resolve(import.meta.dirname, '../../migrations');
const load = createRequire(import.meta.url);

/** File names of all migrations, oldest first. */
export function migrationNames(): string[] {
  return readdirSync(directory)
    .filter((name) => name.endsWith('.cjs'))
    .sort();
}

/** The migration of that file name. */
export function loadMigration(name: string): Migration {
  return load(path.join(directory, name)) as Migration;
}

/** Runs what is missing, and keeps the books of sequelize-cli. */
export async function migrate(sequelize: Sequelize): Promise<void> {
  const queryInterface = sequelize.getQueryInterface();
  await queryInterface.createTable('SequelizeMeta', {
    name: { type: DataTypes.STRING, allowNull: false, primaryKey: true },
  });
  const rows = await sequelize.query<{ name: string }>('SELECT name FROM SequelizeMeta', {
    type: QueryTypes.SELECT,
  });
  const done = new Set(rows.map((row) => row.name));
  for (const name of migrationNames()) {
    if (done.has(name)) continue;
    await loadMigration(name).up(queryInterface, Sequelize);
    await queryInterface.bulkInsert('SequelizeMeta', [{ name }]);
  }
}
