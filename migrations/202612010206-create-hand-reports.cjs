'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS hand_reports (
        id CHAR(36) CHARACTER SET ascii COLLATE ascii_bin NOT NULL PRIMARY KEY,
        site_id INT UNSIGNED NOT NULL,
        track VARCHAR(40) NULL,
        unit_compact VARCHAR(24) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        at DATETIME(3) NOT NULL,
        position SMALLINT UNSIGNED NULL,
        seen BOOLEAN NOT NULL,
        reported_by INT UNSIGNED NOT NULL,
        received_at DATETIME(3) NOT NULL,
        KEY hand_reports_unit (unit_compact, at),
        KEY hand_reports_site (site_id, at)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS hand_reports
    `);
  },
};
