'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE INDEX IF NOT EXISTS work_lane ON work (lane, id)
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP INDEX IF EXISTS work_lane ON work
    `);
  },
};
