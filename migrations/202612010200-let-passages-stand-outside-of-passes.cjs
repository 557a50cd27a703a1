'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE passages
        MODIFY pass_started_at DATETIME(3) NULL,
        MODIFY pass_ordinal TINYINT UNSIGNED NULL,
        ADD COLUMN IF NOT EXISTS stray VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NULL AFTER role
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE passages DROP COLUMN IF EXISTS stray
    `);
  },
};
