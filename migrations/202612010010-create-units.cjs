'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS units (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        unit_key VARCHAR(24) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        kind VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        group_code TINYINT UNSIGNED NULL,
        car_type VARCHAR(60) NULL,
        registered BOOLEAN NOT NULL DEFAULT 0,
        owner_id INT UNSIGNED NULL,
        length_dm SMALLINT UNSIGNED NULL,
        axles TINYINT UNSIGNED NULL,
        created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
        UNIQUE KEY units_key (unit_key),
        KEY units_owner (owner_id, kind),
        CONSTRAINT units_owner_fk FOREIGN KEY (owner_id) REFERENCES organisations (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS units');
  },
};
