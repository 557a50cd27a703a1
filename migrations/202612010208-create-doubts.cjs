'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS doubts (
        unit_id INT UNSIGNED NOT NULL,
        at DATETIME(3) NOT NULL,
        read_point_id INT UNSIGNED NOT NULL,
        previous_read_point_id INT UNSIGNED NOT NULL,
        previous_at DATETIME(3) NOT NULL,
        rail_metres INT UNSIGNED NOT NULL,
        corroborated_by VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL,
        PRIMARY KEY (unit_id, at, read_point_id),
        KEY doubts_at (at, read_point_id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS doubts
    `);
  },
};
