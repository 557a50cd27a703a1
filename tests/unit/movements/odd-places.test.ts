import { expect, test } from 'vitest';
import { at, NetworkBuilder } from '../../support/network-builder.js';
import { Trackside } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const CAR = 'QTKX1';

/** A yard, a line point of which a side was given a place by mistake, and a plant with a dock. */
function oddWorld() {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const line = network.site('QL', { kind: 'line' });
  const plant = network.site('QP', { kind: 'industry' });
  const lead = network.readPoint(yard, 'sensors', { decreasingPlace: at(yard) });
  const passing = network.readPoint(line, 'sensors', { decreasingPlace: at(line) });
  const dock = network.readPoint(plant, 'offsets', {
    kind: 'spot',
    increasingPlace: at(plant, 'dock'),
  });
  return { yard, plant, lead, passing, dock, track: new Trackside(network.build()) };
}

test('nothing stands at a line point, whatever its sides are said to be', () => {
  const { passing, track } = oddWorld();
  track.cross(passing, CAR, '10:00', 'decreasing');
  expect(track.stays(CAR)).toEqual([]);
});

test('a car that only rolls past a spot was not spotted there, and came at an unknown time', () => {
  const { yard, plant, lead, dock, track } = oddWorld();
  track.cross(lead, CAR, '08:00', 'increasing').cross(dock, CAR, '20:00', 'increasing');
  expect(track.stays(CAR)).toMatchObject([
    { siteId: yard },
    { siteId: plant, track: null, arrivalBasis: 'inferred' },
  ]);
});

test('miles over a way that nobody knows are an estimate', () => {
  const { lead, dock, track } = oddWorld();
  track.cross(lead, CAR, '08:00', 'increasing').read(dock, 0, CAR, '20:00');
  expect(track.legs(CAR)).toMatchObject([{ railMetres: 0, estimated: true }]);
});

test('a sighting that fits neither of two that no train could join bears neither out', () => {
  const { configuration, leadA, leadB, line, yardA } = twoYards('sensors');
  const track = new Trackside(configuration).cross(leadA, CAR, '10:00', 'decreasing');
  track.cross(leadB, CAR, '10:05', 'increasing').cross(line, CAR, '10:10', 'increasing');
  expect(track.stays(CAR)).toMatchObject([{ siteId: yardA, departedAt: null }]);
});

test('a car of which sensors tell the direction is beside no track, though one antenna heard it', () => {
  const { configuration, leadA } = twoYards('offsets');
  const track = new Trackside(configuration).read(leadA, 0, CAR, '10:00:00');
  track.wheels(leadA, '10:00:00', '10:00:01', 'increasing').read(leadA, 0, CAR, '10:40:00');
  expect(track.passes(leadA)[0]?.members).toMatchObject([
    { role: 'crossing', direction: 'increasing', basis: 'sensors' },
  ]);
});
