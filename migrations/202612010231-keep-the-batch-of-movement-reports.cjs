'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE movement_reports
        ADD COLUMN IF NOT EXISTS batch_id BIGINT UNSIGNED NOT NULL DEFAULT 0
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE movement_reports DROP COLUMN IF EXISTS batch_id
    `);
  },
};
