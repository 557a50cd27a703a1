import type { Transaction } from 'sequelize';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

/** What a unit is called, as it is written on it: its present number, else its last. */
export async function unitDisplay(
  db: Database,
  unitId: number,
  transaction: Transaction,
): Promise<string> {
  const rows = await modelsOf(db.sequelize).Identity.findAll({
    attributes: ['display', 'validTo'],
    where: { unitId },
    order: [['validTo', 'DESC']],
    transaction,
  });
  return (rows.find(({ validTo }) => validTo === null) ?? rows[0])?.display ?? '';
}
