'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS outbox (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        message_id VARCHAR(255) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        notice_id CHAR(36) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        watch_id INT UNSIGNED NOT NULL,
        person_id INT UNSIGNED NULL,
        address VARCHAR(254) NOT NULL,
        state VARCHAR(12) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        epoch INT UNSIGNED NOT NULL DEFAULT 0,
        claim_expires_at DATETIME(3) NULL,
        tries SMALLINT UNSIGNED NOT NULL DEFAULT 0,
        next_try_at DATETIME(3) NOT NULL,
        may_have_gone_twice BOOLEAN NOT NULL DEFAULT 0,
        reason VARCHAR(400) NULL,
        created_at DATETIME(3) NOT NULL,
        sent_at DATETIME(3) NULL,
        UNIQUE KEY outbox_message (message_id),
        KEY outbox_due (state, next_try_at, id),
        KEY outbox_notice (notice_id),
        CONSTRAINT outbox_watch_fk FOREIGN KEY (watch_id) REFERENCES watches (id) ON DELETE CASCADE,
        CONSTRAINT outbox_person_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS outbox');
  },
};
