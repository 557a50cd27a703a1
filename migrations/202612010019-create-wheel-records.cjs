'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS wheel_records (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        read_point_id INT UNSIGNED NOT NULL,
        started_at DATETIME(3) NOT NULL,
        ended_at DATETIME(3) NOT NULL,
        axles INT UNSIGNED NOT NULL,
        direction VARCHAR(10) CHARACTER SET ascii COLLATE ascii_bin NULL,
        speed_kmh DECIMAL(6,2) NULL,
        received_at DATETIME(3) NOT NULL,
        UNIQUE KEY wheel_records_natural (read_point_id, started_at),
        KEY wheel_records_ended (read_point_id, ended_at),
        CONSTRAINT wheel_records_read_point_fk FOREIGN KEY (read_point_id) REFERENCES read_points (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS wheel_records');
  },
};
