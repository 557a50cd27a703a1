'use strict';

const { demoWorld, idOf, insertMissing, removeAll, rowsBy } = require('./support/demo-world.cjs');

/** The units on the register; strangers get their rows when they are first read. */
const registered = () => demoWorld().units.filter((unit) => unit.owner !== null);

function unitRow(unit, organisations) {
  return {
    unit_key: unit.identity.compact,
    kind: unit.kind,
    group_code: unit.groupCode,
    car_type: unit.carType,
    registered: true,
    owner_id: idOf(organisations, unit.owner),
    length_dm: unit.lengthDm,
    axles: unit.kind === 'container' ? null : unit.axles,
  };
}

function identityRow({ identity }, units) {
  const { compact, scheme, mark, number, display } = identity;
  return { unit_id: idOf(units, compact), compact, scheme, mark, number, display };
}

const instant = (ms) => (ms === null ? null : new Date(ms));

function tagRow(spell, units) {
  return {
    unit_id: idOf(units, spell.unit),
    value: spell.value,
    side: spell.side,
    valid_from: instant(spell.validFrom),
    valid_to: instant(spell.validTo),
  };
}

module.exports = {
  async up(queryInterface) {
    const organisations = await rowsBy(queryInterface, 'organisations', 'code');
    const rows = registered().map((unit) => unitRow(unit, organisations));
    await insertMissing(queryInterface, 'units', rows, (row) => row.unit_key);
    const units = await rowsBy(queryInterface, 'units', 'unit_key');
    const identities = registered().map((unit) => identityRow(unit, units));
    const identityKey = (row) => `${row.unit_id} ${row.compact}`;
    await insertMissing(queryInterface, 'identities', identities, identityKey);
    const spells = demoWorld().tagSpellsAt(Date.now());
    const tags = spells.map((spell) => tagRow(spell, units));
    const tagKey = (row) => `${row.unit_id} ${String(row.value)}`;
    await insertMissing(queryInterface, 'tags', tags, tagKey);
  },
  async down(queryInterface) {
    const keys = registered().map(({ identity }) => identity.compact);
    await removeAll(queryInterface, 'units', 'unit_key', keys);
  },
};
