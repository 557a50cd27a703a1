import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { refuseUsed } from './refuse-used.js';

const uses = [
  { words: 'antennas', sql: 'SELECT 1 FROM antennas WHERE read_point_id = :id' },
  { words: 'wheel records', sql: 'SELECT 1 FROM wheel_records WHERE read_point_id = :id' },
  { words: 'passes', sql: 'SELECT 1 FROM passes WHERE read_point_id = :id' },
];

/** Removes a read point to which nothing refers; else 409. */
export async function removeReadPoint(db: Database, id: number): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    await refuseUsed(db, uses, { id }, transaction);
    await modelsOf(db.sequelize).ReadPoint.destroy({ where: { id }, transaction });
  });
}
