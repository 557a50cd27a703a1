'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS last_seen (
        unit_id INT UNSIGNED NOT NULL PRIMARY KEY,
        at DATETIME(3) NOT NULL,
        state VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        site_id INT UNSIGNED NULL,
        track VARCHAR(40) NULL,
        read_point_id INT UNSIGNED NULL,
        direction VARCHAR(10) CHARACTER SET ascii COLLATE ascii_bin NULL,
        basis VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL,
        pass_started_at DATETIME(3) NULL,
        pass_ordinal TINYINT UNSIGNED NULL,
        stay_site_id INT UNSIGNED NULL,
        stay_first_seen_at DATETIME(3) NULL,
        arrived_at DATETIME(3) NULL,
        quiet_at DATETIME(3) NOT NULL,
        limit_at DATETIME(3) NOT NULL,
        KEY last_seen_at (at, unit_id),
        KEY last_seen_site (site_id, at, unit_id),
        KEY last_seen_quiet (quiet_at, unit_id),
        KEY last_seen_limit (limit_at, unit_id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS last_seen');
  },
};
