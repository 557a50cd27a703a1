'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS antennas (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        site_id INT UNSIGNED NOT NULL,
        read_point_id INT UNSIGNED NOT NULL,
        number TINYINT UNSIGNED NOT NULL,
        offset_m DECIMAL(8,3) NOT NULL,
        side VARCHAR(5) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        UNIQUE KEY antennas_number (site_id, number),
        KEY antennas_read_point (read_point_id),
        CONSTRAINT antennas_site_fk FOREIGN KEY (site_id) REFERENCES sites (id),
        CONSTRAINT antennas_read_point_fk FOREIGN KEY (read_point_id) REFERENCES read_points (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS antennas');
  },
};
