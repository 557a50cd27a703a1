'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS stay_aliases (
        unit_id INT UNSIGNED NOT NULL,
        first_seen_at DATETIME(3) NOT NULL,
        site_id INT UNSIGNED NOT NULL,
        PRIMARY KEY (unit_id, first_seen_at, site_id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS stay_aliases
    `);
  },
};
