import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { refuseUsed } from './refuse-used.js';

const uses = [
  { words: 'people', sql: 'SELECT 1 FROM people WHERE organisation_id = :id' },
  { words: 'cars or boxes on the register', sql: 'SELECT 1 FROM units WHERE owner_id = :id' },
  {
    words: 'movement reports',
    sql: 'SELECT 1 FROM movement_reports WHERE organisation_id = :id',
  },
];

/** Removes an organisation to which nobody and nothing belongs; else 409. */
export async function removeOrganisation(db: Database, id: number): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await refuseUsed(db, uses, { id }, transaction);
    await modelsOf(db.sequelize).Organisation.destroy({ where: { id }, transaction });
  });
}
