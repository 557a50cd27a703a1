'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS identities (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        unit_id INT UNSIGNED NOT NULL,
        compact VARCHAR(24) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        scheme VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        mark VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        number VARCHAR(12) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        display VARCHAR(24) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        valid_from DATETIME(3) NULL,
        valid_to DATETIME(3) NULL,
        KEY identities_compact (compact, valid_from),
        KEY identities_number (number, mark),
        KEY identities_unit (unit_id),
        CONSTRAINT identities_unit_fk FOREIGN KEY (unit_id) REFERENCES units (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS identities');
  },
};
