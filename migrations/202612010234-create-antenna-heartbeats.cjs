'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS antenna_heartbeats (
        site_id INT UNSIGNED NOT NULL,
        number TINYINT UNSIGNED NOT NULL,
        powered BOOLEAN NOT NULL,
        noise DOUBLE NULL,
        received_at DATETIME(3) NOT NULL,
        PRIMARY KEY (site_id, number),
        CONSTRAINT antenna_heartbeats_site_fk FOREIGN KEY (site_id) REFERENCES sites (id)
          ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS antenna_heartbeats
    `);
  },
};
