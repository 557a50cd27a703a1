'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS work (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        kind VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        lane TINYINT UNSIGNED NOT NULL DEFAULT 0,
        read_count INT UNSIGNED NOT NULL,
        payload TEXT NULL,
        received_at DATETIME(3) NOT NULL
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS work');
  },
};
