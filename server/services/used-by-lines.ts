import type { Use } from './refuse-used.js';

/** Read points that name a node, found by `condition` on route_nodes, as next on their line. */
export function usedByLines(condition: string): Use {
  return {
    words: 'lines of read points',
    sql: `SELECT 1 FROM route_nodes
            JOIN read_points
              ON JSON_CONTAINS(
                   JSON_EXTRACT(toward, '$.decreasing[*]', '$.increasing[*]'),
                   JSON_QUOTE(route_nodes.code))
           WHERE ${condition}`,
  };
}
