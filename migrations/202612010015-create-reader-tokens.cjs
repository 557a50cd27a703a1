'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS reader_tokens (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        site_id INT UNSIGNED NOT NULL,
        token_hash BINARY(32) NOT NULL,
        created_at DATETIME(3) NOT NULL,
        revoked_at DATETIME(3) NULL,
        UNIQUE KEY reader_tokens_hash (token_hash),
        KEY reader_tokens_site (site_id),
        CONSTRAINT reader_tokens_site_fk FOREIGN KEY (site_id) REFERENCES sites (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS reader_tokens');
  },
};
