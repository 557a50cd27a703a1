'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE config_state ADD COLUMN IF NOT EXISTS frozen_before DATETIME(3) NULL
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE config_state DROP COLUMN IF EXISTS frozen_before
    `);
  },
};
