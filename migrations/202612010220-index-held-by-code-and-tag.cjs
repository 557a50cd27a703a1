'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE INDEX IF NOT EXISTS held_code_tag ON held (code, tag, read_at)
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP INDEX IF EXISTS held_code_tag ON held
    `);
  },
};
