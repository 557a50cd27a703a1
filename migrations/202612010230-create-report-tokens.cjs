'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS report_tokens (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        organisation_id INT UNSIGNED NOT NULL,
        token_hash BINARY(32) NOT NULL,
        created_at DATETIME(3) NOT NULL,
        revoked_at DATETIME(3) NULL,
        UNIQUE KEY report_tokens_hash (token_hash),
        KEY report_tokens_organisation (organisation_id),
        CONSTRAINT report_tokens_organisation_fk FOREIGN KEY (organisation_id)
          REFERENCES organisations (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS report_tokens
    `);
  },
};
