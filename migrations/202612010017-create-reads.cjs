'use strict';

/** First days of the months from `back` before to `ahead` after the present one, as YYYY-MM-01. */
function monthStarts(back, ahead) {
  const now = new Date();
  return Array.from({ length: back + ahead + 1 }, (_, index) => {
    const month = new Date(Date.UTC(now.getUTCFullYear(), now.getUTCMonth() - back + index, 1));
    return month.toISOString().slice(0, 10);
  });
}

module.exports = {
  async up({ sequelize }) {
    const months = monthStarts(13, 12);
    const partitions = months.slice(1).map((end, index) => {
      const name = months[index].slice(0, 7).replace('-', '');
      return `PARTITION p${name} VALUES LESS THAN ('${end}')`;
    });
    await sequelize.query(`
      CREATE TABLE IF NOT EXISTS \`reads\` (
        batch_id BIGINT UNSIGNED NOT NULL,
        seq SMALLINT UNSIGNED NOT NULL,
        site_id INT UNSIGNED NOT NULL,
        antenna_no TINYINT UNSIGNED NOT NULL,
        tag VARBINARY(64) NOT NULL,
        read_at DATETIME(3) NOT NULL,
        rssi DECIMAL(6,2) NULL,
        read_count INT UNSIGNED NULL,
        hold_code VARCHAR(16) CHARACTER SET ascii COLLATE ascii_bin NULL,
        config_version INT UNSIGNED NOT NULL,
        received_at DATETIME(3) NOT NULL,
        PRIMARY KEY (batch_id, seq, read_at),
        UNIQUE KEY reads_natural (site_id, antenna_no, read_at, tag)
      ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4
      PARTITION BY RANGE COLUMNS (read_at) (
        PARTITION pmin VALUES LESS THAN ('${months[0]}'),
        ${partitions.join(',\n        ')},
        PARTITION pmax VALUES LESS THAN (MAXVALUE)
      )
    `);
  },
  async down({ sequelize }) {
    await sequelize.query('DROP TABLE IF EXISTS `reads`');
  },
};
