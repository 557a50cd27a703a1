import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { refuseUsed } from './refuse-used.js';
import { usedByLines } from './used-by-lines.js';

const uses = [
  {
    words: 'read points',
    sql: `SELECT 1 FROM read_points
           WHERE site_id = :id OR decreasing_site_id = :id OR increasing_site_id = :id`,
  },
  { words: 'people', sql: 'SELECT 1 FROM person_sites WHERE site_id = :id' },
  { words: 'a reader token', sql: 'SELECT 1 FROM reader_tokens WHERE site_id = :id' },
  {
    words: 'edges of the route graph',
    sql: `SELECT 1 FROM route_nodes
            JOIN route_edges
              ON route_nodes.id IN (route_edges.from_node_id, route_edges.to_node_id)
           WHERE route_nodes.site_id = :id`,
  },
  usedByLines('route_nodes.site_id = :id'),
  { words: 'reads', sql: 'SELECT 1 FROM `reads` WHERE site_id = :id' },
  { words: 'movement reports', sql: 'SELECT 1 FROM movement_reports WHERE site_id = :id' },
  { words: 'reports by eye', sql: 'SELECT 1 FROM hand_reports WHERE site_id = :id' },
  { words: 'stays', sql: 'SELECT 1 FROM stays WHERE site_id = :id' },
];

/** Removes a site, with its node, to which nothing refers; else 409. */
export async function removeSite(db: Database, id: number): Promise<void> {
  const { RouteNode, Site } = modelsOf(db.sequelize);
  await inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    await refuseUsed(db, uses, { id }, transaction);
    await RouteNode.destroy({ where: { siteId: id }, transaction });
    await Site.destroy({ where: { id }, transaction });
  });
}
