'use strict';

const { demoWorld, idOf, insertMissing, removeAll, rowsBy } = require('./support/demo-world.cjs');

module.exports = {
  async up(queryInterface) {
    const { nodes, edges } = demoWorld();
    const sites = await rowsBy(queryInterface, 'sites', 'code');
    const nodeRows = nodes.map(({ code, name, site, latitude, longitude }) => ({
      code,
      name,
      site_id: site === null ? null : idOf(sites, site),
      latitude,
      longitude,
    }));
    await insertMissing(queryInterface, 'route_nodes', nodeRows, (row) => row.code);
    const stored = await rowsBy(queryInterface, 'route_nodes', 'code');
    const edgeRows = edges.map((edge) => ({
      from_node_id: idOf(stored, edge.from),
      to_node_id: idOf(stored, edge.to),
      line: edge.line,
      kind: edge.kind,
      rail_metres: edge.railMetres,
    }));
    const key = (row) => `${row.from_node_id} ${row.to_node_id} ${row.line}`;
    await insertMissing(queryInterface, 'route_edges', edgeRows, key);
  },
  async down(queryInterface) {
    const stored = await rowsBy(queryInterface, 'route_nodes', 'code');
    const ids = demoWorld().nodes.flatMap(({ code }) => stored.get(code)?.id ?? []);
    await removeAll(queryInterface, 'route_edges', 'from_node_id', ids);
    await removeAll(queryInterface, 'route_nodes', 'id', ids);
  },
};
