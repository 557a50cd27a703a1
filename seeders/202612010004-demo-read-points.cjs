'use strict';

const { demoWorld, idOf, insertMissing, removeAll, rowsBy } = require('./support/demo-world.cjs');

const placeId = (sites, code) => (code === null ? null : idOf(sites, code));

function readPointRow(point, sites, towardOf) {
  return {
    site_id: idOf(sites, point.site),
    code: point.code,
    name: point.name,
    track: point.track,
    kind: point.kind,
    decreasing_site_id: placeId(sites, point.decreasingPlace),
    decreasing_track: point.kind === 'spot' ? point.track : null,
    increasing_site_id: placeId(sites, point.increasingPlace),
    increasing_track: point.kind === 'spot' ? point.track : null,
    toward: JSON.stringify(towardOf(point)),
  };
}

async function antennaRows(queryInterface, points, sites) {
  const stored = await queryInterface.select(null, 'read_points', {});
  const ids = new Map(stored.map((row) => [`${row.site_id} ${row.code}`, row]));
  return points.flatMap((point) =>
    point.antennas.map((antenna) => ({
      site_id: idOf(sites, point.site),
      read_point_id: idOf(ids, `${idOf(sites, point.site)} ${point.code}`),
      number: antenna.number,
      offset_m: antenna.offsetM,
      side: antenna.side,
    })),
  );
}

module.exports = {
  async up(queryInterface) {
    const { readPoints, towardOf } = demoWorld();
    const sites = await rowsBy(queryInterface, 'sites', 'code');
    const rows = readPoints.map((point) => readPointRow(point, sites, towardOf));
    const pointKey = (row) => `${row.site_id} ${row.code}`;
    await insertMissing(queryInterface, 'read_points', rows, pointKey);
    const antennas = await antennaRows(queryInterface, readPoints, sites);
    const antennaKey = (row) => `${row.site_id} ${row.number}`;
    await insertMissing(queryInterface, 'antennas', antennas, antennaKey);
  },
  async down(queryInterface) {
    const sites = await rowsBy(queryInterface, 'sites', 'code');
    const ids = demoWorld().sites.flatMap(({ code }) => sites.get(code)?.id ?? []);
    await removeAll(queryInterface, 'antennas', 'site_id', ids);
    await removeAll(queryInterface, 'read_points', 'site_id', ids);
  },
};
