'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS releases (
        batch_id BIGINT UNSIGNED NOT NULL,
        seq SMALLINT UNSIGNED NOT NULL,
        read_at DATETIME(3) NOT NULL,
        released_by INT UNSIGNED NULL,
        released_at DATETIME(3) NOT NULL,
        PRIMARY KEY (batch_id, seq)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS releases
    `);
  },
};
