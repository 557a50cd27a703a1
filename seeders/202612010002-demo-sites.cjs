'use strict';

const { demoWorld, insertMissing, removeAll } = require('./support/demo-world.cjs');

module.exports = {
  async up(queryInterface) {
    const rows = demoWorld().sites.map((site) => ({
      code: site.code,
      name: site.name,
      kind: site.kind,
      latitude: site.latitude,
      longitude: site.longitude,
      time_zone: site.timeZone,
      return_hours: site.returnHours,
      dwell_limit_hours: site.dwellLimitHours,
      leads: JSON.stringify(site.leads),
    }));
    await insertMissing(queryInterface, 'sites', rows, (row) => row.code);
  },
  async down(queryInterface) {
    const codes = demoWorld().sites.map(({ code }) => code);
    await removeAll(queryInterface, 'sites', 'code', codes);
  },
};
