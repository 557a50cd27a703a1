import { Op, type Transaction } from 'sequelize';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

/**
 * The unit that carries each identity at `now`; of several the one that began last, as reads are
 * resolved. In one statement that locks what it reads, gaps included.
 */
export async function unitIdsNamedNow(
  db: Database,
  compacts: readonly string[],
  now: Date,
  transaction: Transaction,
): Promise<Map<string, number>> {
  const rows = await modelsOf(db.sequelize).Identity.findAll({
    attributes: ['compact', 'unitId', 'validFrom'],
    where: {
      compact: [...new Set(compacts)],
      validFrom: { [Op.or]: [null, { [Op.lte]: now }] },
      validTo: { [Op.or]: [null, { [Op.gt]: now }] },
    },
    order: [
      ['validFrom', 'ASC'],
      ['id', 'DESC'],
    ],
    lock: transaction.LOCK.UPDATE,
    transaction,
  });
  return new Map(rows.map(({ compact, unitId }) => [compact, unitId] as const));
}
