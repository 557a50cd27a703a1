'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(
      'CREATE INDEX IF NOT EXISTS last_seen_site_limit ON last_seen (site_id, limit_at, unit_id)',
    );
  },
  async down({ sequelize }) {
    await sequelize.query('DROP INDEX IF EXISTS last_seen_site_limit ON last_seen');
  },
};
