import { expect, it, vi } from 'vitest';
import { openDatabase } from '../../server/lib/database.js';
import { modelsOf } from '../../server/models/index.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { buildPerson } from '../support/factories.js';

const db = useTestDatabase();

it('throws when a column is read that the query left out, and Sequelize has nothing to say', async () => {
  const { email } = await buildPerson(db);
  const warn = vi.spyOn(console, 'warn');
  // A connection of its own, on which this is the first record ever loaded.
  const fresh = openDatabase(testDatabaseUrl(), { connections: 1 });
  const { Person } = modelsOf(fresh.sequelize);
  const person = await Person.findOne({ where: { email }, attributes: ['id', 'name'] });
  expect(person?.name).toEqual(expect.any(String));
  expect(() => person?.passwordHash).toThrow(/passwordHash/);
  // Sequelize looks at a first instance one turn later.
  await new Promise((resolve) => setTimeout(resolve));
  await fresh.close();
  expect(warn).not.toHaveBeenCalled();
});
