'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE INDEX IF NOT EXISTS stays_inferred ON stays (unit_id, departure_latest)
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP INDEX IF EXISTS stays_inferred ON stays
    `);
  },
};
