'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS unit_folds (
        unit_id INT UNSIGNED NOT NULL,
        before_at DATETIME(3) NOT NULL,
        opening BOOLEAN NOT NULL,
        state MEDIUMTEXT NOT NULL,
        PRIMARY KEY (unit_id, before_at)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS unit_folds');
  },
};
