'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(
      `ALTER TABLE read_points ADD COLUMN IF NOT EXISTS toward TEXT NOT NULL DEFAULT '{}'`,
    );
  },
  async down({ sequelize }) {
    await sequelize.query('ALTER TABLE read_points DROP COLUMN IF EXISTS toward');
  },
};
