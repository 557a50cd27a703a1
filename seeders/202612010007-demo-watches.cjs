'use strict';

const { idOf, insertMissing, removeAll, rowsBy } = require('./support/demo-world.cjs');

/** What three of the demo people have asked to be told, so that alerts and mail show something. */
const WATCHES = [
  { email: 'owner@fishplate.example', name: 'Tank cars gone quiet', kind: 'quiet', hours: 72 },
  { email: 'boxes@fishplate.example', name: 'Boxes gone quiet', kind: 'quiet', hours: 72 },
  {
    email: 'dispatcher@fishplate.example',
    name: 'Standing over four days',
    kind: 'dwell',
    hours: 96,
    sites: ['ALDER', 'CAIRN', 'BITTERN'],
  },
];

module.exports = {
  async up(queryInterface) {
    const people = await rowsBy(queryInterface, 'people', 'email');
    const sites = await rowsBy(queryInterface, 'sites', 'code');
    const rows = WATCHES.map(({ email, name, kind, hours, sites: codes }) => ({
      person_id: idOf(people, email),
      name,
      kind,
      hours,
      scope: JSON.stringify(codes ? { siteIds: codes.map((code) => idOf(sites, code)) } : {}),
      addresses: '[]',
      schedule: JSON.stringify({ at: 'once' }),
      created_at: new Date(),
    }));
    const key = (row) => `${row.person_id} ${row.name}`;
    await insertMissing(queryInterface, 'watches', rows, key);
    const watches = await queryInterface.select(null, 'watches', {});
    const seeded = new Set(rows.map(key));
    const told = watches
      .filter((watch) => seeded.has(key(watch)))
      .map((watch) => ({ watch_id: watch.id, person_id: watch.person_id }));
    const tellsWhom = (row) => `${row.watch_id} ${row.person_id}`;
    await insertMissing(queryInterface, 'watch_people', told, tellsWhom);
  },
  async down(queryInterface) {
    const names = WATCHES.map(({ name }) => name);
    await removeAll(queryInterface, 'watches', 'name', names);
  },
};
