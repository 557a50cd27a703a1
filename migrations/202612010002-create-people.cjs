'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS people (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        email VARCHAR(254) NOT NULL,
        name VARCHAR(120) NOT NULL,
        password_hash VARCHAR(72) CHARACTER SET ascii COLLATE ascii_bin NULL,
        organisation_id INT UNSIGNED NULL,
        roles VARCHAR(80) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        time_zone VARCHAR(64) CHARACTER SET ascii COLLATE ascii_bin NOT NULL DEFAULT 'UTC',
        created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
        UNIQUE KEY people_email (email),
        KEY people_organisation (organisation_id),
        CONSTRAINT people_organisation_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS people');
  },
};
