'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS route_nodes (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        code VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        name VARCHAR(120) NOT NULL,
        site_id INT UNSIGNED NULL,
        latitude DECIMAL(9,6) NOT NULL,
        longitude DECIMAL(9,6) NOT NULL,
        UNIQUE KEY route_nodes_code (code),
        UNIQUE KEY route_nodes_site (site_id),
        CONSTRAINT route_nodes_site_fk FOREIGN KEY (site_id) REFERENCES sites (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS route_nodes');
  },
};
