'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS passages (
        read_point_id INT UNSIGNED NOT NULL,
        first_at DATETIME(3) NOT NULL,
        unit_id INT UNSIGNED NOT NULL,
        first_antenna TINYINT UNSIGNED NOT NULL,
        first_tag VARBINARY(64) NOT NULL,
        last_at DATETIME(3) NOT NULL,
        pass_started_at DATETIME(3) NOT NULL,
        pass_ordinal TINYINT UNSIGNED NOT NULL DEFAULT 0,
        direction VARCHAR(10) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        direction_basis VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL,
        role VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        speed_kmh DECIMAL(6,2) NULL,
        read_count INT UNSIGNED NOT NULL,
        evidence MEDIUMTEXT NOT NULL,
        PRIMARY KEY (read_point_id, first_at, unit_id),
        KEY passages_last (read_point_id, last_at, first_at),
        KEY passages_unit (unit_id, first_at, read_point_id),
        KEY passages_pass (read_point_id, pass_started_at, pass_ordinal)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS passages');
  },
};
