'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS mail_attempts (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        outbox_id BIGINT UNSIGNED NOT NULL,
        number SMALLINT UNSIGNED NOT NULL,
        epoch INT UNSIGNED NOT NULL,
        outcome VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        detail VARCHAR(400) NULL,
        started_at DATETIME(3) NOT NULL,
        finished_at DATETIME(3) NULL,
        UNIQUE KEY mail_attempts_number (outbox_id, number),
        CONSTRAINT mail_attempts_outbox_fk FOREIGN KEY (outbox_id) REFERENCES outbox (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS mail_attempts');
  },
};
