import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import { changeConfiguration } from './change-configuration.js';

/** Takes an edge out of the route graph; its nodes stay. */
export async function removeRouteEdge(
  db: Database,
  id: number,
  requestedBy: number | null,
): Promise<void> {
  await changeConfiguration(db, requestedBy, async (transaction) => {
    await modelsOf(db.sequelize).RouteEdge.destroy({ where: { id }, transaction });
  });
}
