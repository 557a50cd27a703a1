'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS site_heartbeats (
        site_id INT UNSIGNED NOT NULL PRIMARY KEY,
        reader_time DATETIME(3) NOT NULL,
        received_at DATETIME(3) NOT NULL,
        clock_offset_ms BIGINT NOT NULL,
        CONSTRAINT site_heartbeats_site_fk FOREIGN KEY (site_id) REFERENCES sites (id)
          ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS site_heartbeats
    `);
  },
};
