'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS sites (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        code VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        name VARCHAR(120) NOT NULL,
        kind VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        latitude DECIMAL(9,6) NOT NULL,
        longitude DECIMAL(9,6) NOT NULL,
        time_zone VARCHAR(64) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        return_hours DECIMAL(6,2) NOT NULL DEFAULT 12,
        dwell_limit_hours DECIMAL(7,2) NOT NULL DEFAULT 96,
        created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
        UNIQUE KEY sites_code (code)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS sites');
  },
};
