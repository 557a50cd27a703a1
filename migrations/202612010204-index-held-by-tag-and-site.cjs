'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE held
        ADD INDEX IF NOT EXISTS held_tag (tag, read_at),
        ADD INDEX IF NOT EXISTS held_site (site_id, code, read_at)
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      ALTER TABLE held DROP INDEX IF EXISTS held_tag, DROP INDEX IF EXISTS held_site
    `);
  },
};
