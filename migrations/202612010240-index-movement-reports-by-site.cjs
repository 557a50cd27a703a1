'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE INDEX IF NOT EXISTS movement_reports_site ON movement_reports (site_id, unit_compact)
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP INDEX IF EXISTS movement_reports_site ON movement_reports
    `);
  },
};
