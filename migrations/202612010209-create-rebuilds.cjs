'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS rebuilds (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        cause VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        label VARCHAR(200) NOT NULL,
        requested_by INT UNSIGNED NULL,
        state VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        requested_at DATETIME(3) NOT NULL,
        finished_at DATETIME(3) NULL,
        KEY rebuilds_state (state, id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS rebuilds
    `);
  },
};
