'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS watch_people (
        watch_id INT UNSIGNED NOT NULL,
        person_id INT UNSIGNED NOT NULL,
        PRIMARY KEY (watch_id, person_id),
        KEY watch_people_person (person_id, watch_id),
        CONSTRAINT watch_people_watch_fk FOREIGN KEY (watch_id) REFERENCES watches (id) ON DELETE CASCADE,
        CONSTRAINT watch_people_person_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS watch_people');
  },
};
