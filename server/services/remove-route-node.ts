import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { refuseUsed } from './refuse-used.js';
import { usedByLines } from './used-by-lines.js';

const uses = [
  {
    words: 'edges of the route graph',
    sql: 'SELECT 1 FROM route_edges WHERE :id IN (from_node_id, to_node_id)',
  },
  {
    words: 'its site',
    sql: 'SELECT 1 FROM route_nodes WHERE id = :id AND site_id IS NOT NULL',
  },
  usedByLines('route_nodes.id = :id'),
];

/** Removes a junction to which nothing refers; 409 for others and for the node of a site. */
export async function removeRouteNode(db: Database, id: number): Promise<void> {
  await inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    await refuseUsed(db, uses, { id }, transaction);
    await modelsOf(db.sequelize).RouteNode.destroy({ where: { id }, transaction });
  });
}
