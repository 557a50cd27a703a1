'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS read_points (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        site_id INT UNSIGNED NOT NULL,
        code VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        name VARCHAR(120) NOT NULL,
        track VARCHAR(40) NULL,
        kind VARCHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        decreasing_site_id INT UNSIGNED NULL,
        decreasing_track VARCHAR(40) NULL,
        increasing_site_id INT UNSIGNED NULL,
        increasing_track VARCHAR(40) NULL,
        pass_gap_seconds INT UNSIGNED NOT NULL DEFAULT 180,
        visit_gap_seconds INT UNSIGNED NOT NULL DEFAULT 60,
        drill_minutes INT UNSIGNED NOT NULL DEFAULT 60,
        UNIQUE KEY read_points_code (site_id, code),
        CONSTRAINT read_points_site_fk FOREIGN KEY (site_id) REFERENCES sites (id),
        CONSTRAINT read_points_decreasing_fk FOREIGN KEY (decreasing_site_id) REFERENCES sites (id),
        CONSTRAINT read_points_increasing_fk FOREIGN KEY (increasing_site_id) REFERENCES sites (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS read_points');
  },
};
