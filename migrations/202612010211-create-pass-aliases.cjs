'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS pass_aliases (
        read_point_id INT UNSIGNED NOT NULL,
        started_at DATETIME(3) NOT NULL,
        ordinal TINYINT UNSIGNED NOT NULL,
        unit_id INT UNSIGNED NOT NULL,
        PRIMARY KEY (read_point_id, started_at, ordinal)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS pass_aliases
    `);
  },
};
