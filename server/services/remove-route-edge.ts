import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { bumpConfigVersion } from './bump-config-version.js';

/** Takes an edge out of the route graph; its nodes stay. */
export async function removeRouteEdge(db: Database, id: number): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    await modelsOf(db.sequelize).RouteEdge.destroy({ where: { id }, transaction });
  });
}
