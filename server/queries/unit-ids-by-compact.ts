import type { Transaction } from 'sequelize';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

const OPEN_END = Number.POSITIVE_INFINITY;

/** The unit that holds each identity now, else the one that held it last. */
export async function unitIdsByCompact(
  db: Database,
  compacts: string[],
  transaction?: Transaction,
): Promise<Map<string, number>> {
  const rows = await modelsOf(db.sequelize).Identity.findAll({
    attributes: ['compact', 'unitId', 'validTo'],
    where: { compact: [...new Set(compacts)] },
    transaction,
  });
  const latest = new Map<string, { unitId: number; until: number }>();
  for (const { compact, unitId, validTo } of rows) {
    const until = validTo?.getTime() ?? OPEN_END;
    const other = latest.get(compact);
    if (!other || until > other.until) latest.set(compact, { unitId, until });
  }
  return new Map([...latest].map(([compact, { unitId }]) => [compact, unitId]));
}
