'use strict';

const bcrypt = require('bcryptjs');
const { demoWorld, idOf, insertMissing, removeAll, rowsBy } = require('./support/demo-world.cjs');

const ROUNDS = 10;

async function personRows(world, organisations) {
  return Promise.all(
    world.people.map(async (person) => ({
      email: person.email,
      name: person.name,
      password_hash: await bcrypt.hash(world.password, ROUNDS),
      organisation_id: person.organisation && idOf(organisations, person.organisation),
      roles: person.roles.join(','),
      time_zone: person.timeZone,
    })),
  );
}

module.exports = {
  async up(queryInterface) {
    const world = demoWorld();
    const organisations = await rowsBy(queryInterface, 'organisations', 'code');
    const rows = await personRows(world, organisations);
    await insertMissing(queryInterface, 'people', rows, (row) => row.email);
    const people = await rowsBy(queryInterface, 'people', 'email');
    const sites = await rowsBy(queryInterface, 'sites', 'code');
    const places = world.people.flatMap((person) =>
      person.sites.map((code) => ({
        person_id: idOf(people, person.email),
        site_id: idOf(sites, code),
      })),
    );
    const key = (row) => `${row.person_id} ${row.site_id}`;
    await insertMissing(queryInterface, 'person_sites', places, key);
  },
  async down(queryInterface) {
    const emails = demoWorld().people.map(({ email }) => email);
    await removeAll(queryInterface, 'people', 'email', emails);
  },
};
