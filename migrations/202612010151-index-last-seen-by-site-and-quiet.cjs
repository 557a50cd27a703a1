'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(
      'CREATE INDEX IF NOT EXISTS last_seen_site_quiet ON last_seen (site_id, quiet_at, unit_id)',
    );
  },
  async down({ sequelize }) {
    await sequelize.query('DROP INDEX IF EXISTS last_seen_site_quiet ON last_seen');
  },
};
