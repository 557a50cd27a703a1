'use strict';

module.exports = {
  async up({ sequelize }) {
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS rebuild_spans (
        id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
        rebuild_id INT UNSIGNED NOT NULL,
        read_point_id INT UNSIGNED NOT NULL,
        since_at DATETIME(3) NOT NULL,
        until_at DATETIME(3) NOT NULL,
        next_at DATETIME(3) NOT NULL,
        done BOOLEAN NOT NULL DEFAULT 0,
        KEY rebuild_spans_rebuild (rebuild_id, done, id)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
    `);
  },
  async down({ sequelize }) {
    await sequelize.query(`
      DROP TABLE IF EXISTS rebuild_spans
    `);
  },
};
