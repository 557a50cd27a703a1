'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS stays (
        unit_id INT UNSIGNED NOT NULL,
        first_seen_at DATETIME(3) NOT NULL,
        site_id INT UNSIGNED NOT NULL,
        last_seen_at DATETIME(3) NOT NULL,
        track VARCHAR(40) NULL,
        arrived_at DATETIME(3) NULL,
        arrival_basis VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        arrival_earliest DATETIME(3) NULL,
        arrival_latest DATETIME(3) NULL,
        arrival_final_at DATETIME(3) NULL,
        departed_at DATETIME(3) NULL,
        departure_basis VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL,
        departure_earliest DATETIME(3) NULL,
        departure_latest DATETIME(3) NULL,
        departure_final_at DATETIME(3) NULL,
        excursions SMALLINT UNSIGNED NOT NULL,
        out_of_dwell BOOLEAN NOT NULL,
        PRIMARY KEY (unit_id, first_seen_at, site_id),
        KEY stays_site (site_id, departed_at, arrived_at)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS stays');
  },
};
