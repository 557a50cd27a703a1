'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(
      'ALTER TABLE passages ADD COLUMN IF NOT EXISTS tag_count TINYINT UNSIGNED NOT NULL DEFAULT 1',
    );
  },
  async down({ sequelize }) {
    await sequelize.query('ALTER TABLE passages DROP COLUMN IF EXISTS tag_count');
  },
};
