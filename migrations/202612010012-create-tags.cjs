'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS tags (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        unit_id INT UNSIGNED NOT NULL,
        value VARBINARY(64) NOT NULL,
        side VARCHAR(5) CHARACTER SET ascii COLLATE ascii_bin NULL,
        valid_from DATETIME(3) NULL,
        valid_to DATETIME(3) NULL,
        KEY tags_value (value, valid_from),
        KEY tags_unit (unit_id),
        CONSTRAINT tags_unit_fk FOREIGN KEY (unit_id) REFERENCES units (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS tags');
  },
};
