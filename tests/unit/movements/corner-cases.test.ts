import { describe, expect, test } from 'vitest';
import { encodeAei } from '../../../server/domain/identifiers/aei.js';
import { at, NetworkBuilder, type Equipped } from '../../support/network-builder.js';
import { tagOf, time, Trackside } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const CAR = 'QTKX1';

function lead(equipped: Equipped, build: (network: NetworkBuilder) => unknown = () => undefined) {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const point = network.readPoint(yard, equipped, { decreasingPlace: at(yard) });
  build(network);
  return { point, track: new Trackside(network.build()) };
}

describe('a passage', () => {
  test('counts a read that came twice once', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, CAR, '10:00:00').read(point, 0, CAR, '10:00:00');
    expect(track.passes(point)).toMatchObject([{ members: [{ passage: { readCount: 1 } }] }]);
  });

  test('is of the kind that the register says, whatever its tag says', () => {
    const { point, track } = lead('sensors', (network) => network.register('QTKX2', 'locomotive'));
    // A minute and a half is no gap between cars, and one before a locomotive.
    track.read(point, 0, CAR, '10:00:00').read(point, 0, 'QTKX2', '10:01:30');
    expect(track.passes(point).map(({ members }) => members.length)).toEqual([1, 1]);
  });

  test('of a stranger is of the kind that its lowest group code says, whichever tag came first', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, CAR, '10:00:00').read(point, 0, 'QTKX2', '10:01:30');
    const locomotive = encodeAei({ groupCode: 5, initial: 'QTKX', number: 2, side: 'right' });
    const [, first] = track.ledger.reads;
    if (first) track.ledger.reads.push({ ...first, at: first.at + 1, tag: locomotive });
    expect(track.passes(point).map(({ members }) => members.length)).toEqual([1, 1]);
  });

  test('between two wheel records goes by the nearer one', () => {
    const { point, track } = lead('sensors');
    track.wheels(point, '09:59:45', '09:59:52', 'decreasing');
    track.wheels(point, '10:00:03', '10:00:10', 'increasing').read(point, 0, CAR, '10:00:00');
    expect(track.passes(point)).toMatchObject([{ direction: 'increasing', basis: 'sensors' }]);
  });

  test('is never faster than 300 km/h, whatever the jitter makes of 6 m', () => {
    const { point, track } = lead('offsets');
    track.cross(point, CAR, '10:00:00', 'increasing', 0.05);
    expect(track.passes(point)[0]?.speedKmh).toBe(300);
  });

  test('under a wheel record does not go back by its tags', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, CAR, '10:00:00').read(point, 0, CAR, '10:00:15', 'right');
    track.read(point, 0, CAR, '10:00:30').wheels(point, '09:59:59', '10:00:31', null);
    expect(tagOf(CAR)).not.toBe(tagOf(CAR, 'right'));
    expect(track.passes(point)[0]?.members).toMatchObject([{ role: 'presence' }]);
  });
});

describe('a stay', () => {
  const world = twoYards('sensors');
  const { leadA, leadB, gate, yardA, yardB, plant } = world;
  const trackside = () => new Trackside(world.configuration);

  test('goes on with an excursion when a report has it back soon after it went out', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.cross(leadA, CAR, '10:00', 'increasing').report(yardA, 'arrived', CAR, '11:00');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardA, arrivedAt: time('08:00'), departedAt: null, excursions: 1 },
    ]);
  });

  test('that a person closed is not opened again by a sighting: it has come anew', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardA, 'notThere', CAR, '10:00', { basis: 'hand' });
    track.stand(leadA, CAR, '12:00');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardA, departedAt: time('10:00'), departureBasis: 'hand', excursions: 0 },
      { siteId: yardA, firstSeenAt: time('12:00'), departedAt: null, arrivalBasis: 'inferred' },
    ]);
  });

  test('is not struck by crossing the same way again: it stepped back unseen', () => {
    const track = trackside().cross(gate, CAR, '10:00', 'increasing');
    track.cross(gate, CAR, '10:45', 'increasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, departedAt: time('10:00') },
      { siteId: plant, arrivedAt: time('10:00'), lastSeenAt: time('10:45'), departedAt: null },
    ]);
  });

  test('is not struck by going out elsewhere the other way: it came back unseen', () => {
    const track = trackside().cross(leadB, CAR, '08:00', 'increasing');
    track.cross(gate, CAR, '10:00', 'increasing').cross(leadB, CAR, '10:30', 'decreasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, departedAt: time('10:00') },
      { siteId: plant, arrivedAt: time('10:00'), departureBasis: 'inferred' },
      { siteId: yardB, arrivalBasis: 'inferred', departedAt: time('10:30') },
    ]);
  });

  test('ends when it comes in over the gate again after the return time: an exit was missed', () => {
    const track = trackside().cross(gate, CAR, '10:00', 'increasing');
    track.cross(gate, CAR, '3T10:00', 'increasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, departedAt: time('10:00') },
      { siteId: plant, arrivedAt: time('10:00'), departureBasis: 'inferred' },
      { siteId: yardB, departedAt: time('3T10:00') },
      { siteId: plant, arrivedAt: time('3T10:00'), departedAt: null },
    ]);
  });

  test('begins once where the first sighting is between two tracks of its site', () => {
    const network = new NetworkBuilder();
    const yard = network.site('QA');
    const places = { decreasingPlace: at(yard, '1'), increasingPlace: at(yard, '2') };
    const hump = network.readPoint(yard, 'sensors', places);
    const track = new Trackside(network.build()).cross(hump, CAR, '10:00', 'increasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yard, track: '2', arrivalBasis: 'unknown', departedAt: null, excursions: 0 },
    ]);
  });
});

test('a registered car is not quiet while it is on hand, and is once it is gone long enough', () => {
  const { point, track } = lead('sensors', (network) => network.register(CAR, 'car'));
  track.cross(point, CAR, '10:00', 'decreasing');
  expect(track.lastSeen(CAR)).toMatchObject({ state: 'onHand', quietAt: null });
  track.cross(point, CAR, '11:00', 'increasing');
  expect(track.lastSeen(CAR)).toMatchObject({ state: 'enRoute', quietAt: time('5T11:00') });
});
