'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS visible_units (
        org_id INT UNSIGNED NOT NULL,
        unit_id INT UNSIGNED NOT NULL,
        at DATETIME(3) NOT NULL,
        state VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        site_id INT UNSIGNED NOT NULL DEFAULT 0,
        quiet_at DATETIME(3) NOT NULL,
        limit_at DATETIME(3) NOT NULL,
        PRIMARY KEY (org_id, unit_id),
        KEY visible_units_at (org_id, at, unit_id),
        KEY visible_units_state (org_id, state, at, unit_id),
        KEY visible_units_site (org_id, site_id, at, unit_id),
        KEY visible_units_quiet (org_id, quiet_at, unit_id),
        KEY visible_units_limit (org_id, limit_at, unit_id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS visible_units');
  },
};
