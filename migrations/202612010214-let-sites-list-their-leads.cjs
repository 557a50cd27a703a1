'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE sites ADD COLUMN IF NOT EXISTS leads TEXT NOT NULL DEFAULT '[]'
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE sites DROP COLUMN IF EXISTS leads
    `);
  },
};
