'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS passes (
        read_point_id INT UNSIGNED NOT NULL,
        started_at DATETIME(3) NOT NULL,
        ordinal TINYINT UNSIGNED NOT NULL DEFAULT 0,
        ended_at DATETIME(3) NOT NULL,
        direction VARCHAR(10) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        direction_basis VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL,
        speed_kmh DECIMAL(6,2) NULL,
        unit_count SMALLINT UNSIGNED NOT NULL,
        reversal BOOLEAN NOT NULL,
        clean_start BOOLEAN NOT NULL,
        PRIMARY KEY (read_point_id, started_at, ordinal),
        KEY passes_clean (read_point_id, clean_start, started_at),
        KEY passes_started (started_at, read_point_id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS passes');
  },
};
