'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS movement_reports (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        organisation_id INT UNSIGNED NOT NULL,
        source VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
        reference VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
        unit_compact VARCHAR(24) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        event VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        at DATETIME(3) NOT NULL,
        site_id INT UNSIGNED NOT NULL,
        received_at DATETIME(3) NOT NULL,
        UNIQUE KEY movement_reports_natural (organisation_id, source, reference),
        KEY movement_reports_unit (unit_compact, at)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS movement_reports
    `);
  },
};
