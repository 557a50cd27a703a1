'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE dirty_units
        ADD COLUMN IF NOT EXISTS lane TINYINT UNSIGNED NOT NULL DEFAULT 0,
        ADD INDEX IF NOT EXISTS dirty_units_lane (lane, unit_id)
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE dirty_units DROP COLUMN IF EXISTS lane, DROP INDEX IF EXISTS dirty_units_lane
    `);
  },
};
