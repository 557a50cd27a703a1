'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS watches (
        id INT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        person_id INT UNSIGNED NOT NULL,
        name VARCHAR(120) NOT NULL,
        kind VARCHAR(12) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
        scope JSON NOT NULL,
        addresses JSON NOT NULL,
        schedule JSON NOT NULL,
        include_on_hand BOOLEAN NOT NULL DEFAULT 0,
        hours DECIMAL(7,2) NOT NULL,
        created_at DATETIME(3) NOT NULL,
        evaluated_at DATETIME(3) NULL,
        ended_at DATETIME(3) NULL,
        KEY watches_person (person_id, ended_at),
        KEY watches_ended (ended_at, id),
        CONSTRAINT watches_person_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS watches');
  },
};
