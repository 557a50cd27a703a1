'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS person_sites (
        person_id INT UNSIGNED NOT NULL,
        site_id INT UNSIGNED NOT NULL,
        PRIMARY KEY (person_id, site_id),
        KEY person_sites_site (site_id),
        CONSTRAINT person_sites_person_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE,
        CONSTRAINT person_sites_site_fk FOREIGN KEY (site_id) REFERENCES sites (id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS person_sites');
  },
};
