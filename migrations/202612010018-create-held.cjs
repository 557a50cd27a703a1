'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS held (
        batch_id BIGINT UNSIGNED NOT NULL,
        seq SMALLINT UNSIGNED NOT NULL,
        read_at DATETIME(3) NOT NULL,
        site_id INT UNSIGNED NOT NULL,
        tag VARBINARY(64) NOT NULL,
        code VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        config_version INT UNSIGNED NOT NULL,
        PRIMARY KEY (batch_id, seq),
        KEY held_code (code, read_at)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS held');
  },
};
