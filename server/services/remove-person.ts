import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { refuseUsed } from './refuse-used.js';
import { requireAdministrator } from './upsert-people.js';

const uses = [
  { words: 'watches', sql: 'SELECT 1 FROM watches WHERE person_id = :id AND ended_at IS NULL' },
];

/** Removes a person with their sessions; 409 for one with watches, and for the last administrator. */
export async function removePerson(db: Database, id: number): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await refuseUsed(db, uses, { id }, transaction);
    await modelsOf(db.sequelize).Person.destroy({ where: { id }, transaction });
    await requireAdministrator(db, transaction);
  });
}
