'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      INSERT INTO config_state (id, version) VALUES (1, 1)
      ON DUPLICATE KEY UPDATE id = id
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DELETE FROM config_state');
  },
};
