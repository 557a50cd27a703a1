'use strict';

const tsx = require('tsx/cjs/api');

const CHUNK = 500;

/** The invented region, read from the one TypeScript description, so that no build comes first. */
function demoWorld() {
  return tsx.require('../../server/simulator/world.ts', __filename).world;
}

/** Every row of `table`, keyed by the value of `column`. */
async function rowsBy(queryInterface, table, column) {
  const rows = await queryInterface.select(null, table, {});
  return new Map(rows.map((row) => [String(row[column]), row]));
}

/**
 * Inserts the rows whose `key(row)` no stored row has, in chunks, so that seeding twice changes
 * nothing and keeps what an administrator changed since. Returns how many were new.
 */
async function insertMissing(queryInterface, table, rows, key) {
  const stored = new Set((await queryInterface.select(null, table, {})).map(key));
  const missing = rows.filter((row) => !stored.has(key(row)));
  for (let from = 0; from < missing.length; from += CHUNK) {
    await queryInterface.bulkInsert(table, missing.slice(from, from + CHUNK));
  }
  if (missing.length > 0) await bumpConfigVersion(queryInterface);
  return missing.length;
}

/** Tells every cache of the configuration that it changed. */
async function bumpConfigVersion(queryInterface) {
  await queryInterface.sequelize.query(
    'UPDATE config_state SET version = version + 1 WHERE id = 1',
  );
}

/** Deletes the rows of `table` whose `column` is one of `values`, in chunks. */
async function removeAll(queryInterface, table, column, values) {
  for (let from = 0; from < values.length; from += CHUNK) {
    await queryInterface.bulkDelete(table, { [column]: values.slice(from, from + CHUNK) });
  }
  await bumpConfigVersion(queryInterface);
}

/** The id under `key`; throws when the seeder it comes from has not run. */
function idOf(rows, key) {
  const row = rows.get(key);
  if (!row) throw new Error(`${key} is not there: run the seeders in their order.`);
  return row.id;
}

module.exports = { demoWorld, rowsBy, insertMissing, removeAll, idOf };
