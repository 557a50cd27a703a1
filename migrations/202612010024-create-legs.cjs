'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS legs (
        unit_id INT UNSIGNED NOT NULL,
        to_first_seen_at DATETIME(3) NOT NULL,
        to_site_id INT UNSIGNED NOT NULL,
        from_first_seen_at DATETIME(3) NOT NULL,
        from_site_id INT UNSIGNED NOT NULL,
        departed_at DATETIME(3) NOT NULL,
        arrived_at DATETIME(3) NULL,
        rail_metres INT UNSIGNED NOT NULL,
        estimated BOOLEAN NOT NULL,
        PRIMARY KEY (unit_id, to_first_seen_at, to_site_id),
        KEY legs_arrived (unit_id, arrived_at)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS legs');
  },
};
