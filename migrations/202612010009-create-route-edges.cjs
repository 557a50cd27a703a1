'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS route_edges (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        from_node_id INT UNSIGNED NOT NULL,
        to_node_id INT UNSIGNED NOT NULL,
        line VARCHAR(60) NOT NULL,
        kind VARCHAR(5) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        rail_metres INT UNSIGNED NOT NULL,
        UNIQUE KEY route_edges_ends (from_node_id, to_node_id, line),
        KEY route_edges_to (to_node_id),
        CONSTRAINT route_edges_from_fk FOREIGN KEY (from_node_id) REFERENCES route_nodes (id),
        CONSTRAINT route_edges_to_fk FOREIGN KEY (to_node_id) REFERENCES route_nodes (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS route_edges');
  },
};
