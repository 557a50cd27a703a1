'use strict';

const { demoWorld, insertMissing, removeAll } = require('./support/demo-world.cjs');

module.exports = {
  async up(queryInterface) {
    const rows = demoWorld().organisations.map(({ code, name, kind }) => ({ code, name, kind }));
    await insertMissing(queryInterface, 'organisations', rows, (row) => row.code);
  },
  async down(queryInterface) {
    const codes = demoWorld().organisations.map(({ code }) => code);
    await removeAll(queryInterface, 'organisations', 'code', codes);
  },
};
