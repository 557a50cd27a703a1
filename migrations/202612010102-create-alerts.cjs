'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS alerts (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        watch_id INT UNSIGNED NOT NULL,
        unit_id INT UNSIGNED NOT NULL,
        state VARCHAR(12) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        lasting BOOLEAN AS (IF(state = 'cleared', NULL, 1)) PERSISTENT,
        site_id INT UNSIGNED NULL,
        since_at DATETIME(3) NOT NULL,
        at_least BOOLEAN NOT NULL,
        hours DECIMAL(7,2) NOT NULL,
        notice_id CHAR(36) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        raised_at DATETIME(3) NOT NULL,
        acknowledged_at DATETIME(3) NULL,
        acknowledged_by INT UNSIGNED NULL,
        cleared_at DATETIME(3) NULL,
        cleared_because VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL,
        UNIQUE KEY alerts_lasting (watch_id, unit_id, lasting),
        KEY alerts_watch_state (watch_id, state, raised_at, id),
        KEY alerts_state (state, raised_at, id),
        KEY alerts_notice (notice_id),
        KEY alerts_unit (unit_id),
        CONSTRAINT alerts_watch_fk FOREIGN KEY (watch_id) REFERENCES watches (id) ON DELETE CASCADE,
        CONSTRAINT alerts_unit_fk FOREIGN KEY (unit_id) REFERENCES units (id) ON DELETE CASCADE,
        CONSTRAINT alerts_acknowledged_fk FOREIGN KEY (acknowledged_by) REFERENCES people (id) ON DELETE SET NULL
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS alerts');
  },
};
