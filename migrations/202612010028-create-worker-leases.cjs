'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS worker_leases (
        name VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL PRIMARY KEY,
        holder VARCHAR(80) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        epoch BIGINT UNSIGNED NOT NULL,
        expires_at DATETIME(3) NOT NULL
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS worker_leases');
  },
};
