import { QueryTypes, Sequelize } from 'sequelize';
import { afterAll, describe, expect, it } from 'vitest';
import { openDatabase } from '../../server/lib/database.js';
import { useEmptyDatabase } from '../support/database.js';
import { loadMigration, migrate, migrationNames } from '../support/migrations.js';

const { sequelize, close } = openDatabase(await useEmptyDatabase('fishplate_migrations'));
const queryInterface = sequelize.getQueryInterface();

function columns() {
  return sequelize.query<{ tableName: string }>(
    `SELECT table_name AS tableName, column_name, column_type, is_nullable, column_default
       FROM information_schema.columns WHERE table_schema = DATABASE()
      ORDER BY table_name, column_name`,
    { type: QueryTypes.SELECT },
  );
}

describe('migrations', () => {
  afterAll(close);

  it('lead up, down to nothing and up again to the same schema', async () => {
    await migrate(sequelize);
    const before = await columns();
    expect(before.length).toBeGreaterThan(100);

    for (const name of migrationNames().reverse()) {
      await loadMigration(name).down(queryInterface, Sequelize);
    }
    const left = await columns();
    expect(new Set(left.map((column) => column.tableName))).toEqual(new Set(['SequelizeMeta']));

    await sequelize.query('DELETE FROM SequelizeMeta');
    await migrate(sequelize);
    expect(await columns()).toEqual(before);
  });

  it('change nothing where they have run already', async () => {
    const before = await columns();
    for (const name of migrationNames()) {
      await loadMigration(name).up(queryInterface, Sequelize);
    }
    expect(await columns()).toEqual(before);
  });
});
