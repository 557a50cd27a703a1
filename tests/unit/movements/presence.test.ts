import { describe, expect, test } from 'vitest';
import { NetworkBuilder, at } from '../../support/network-builder.js';
import { STOOD_MS, Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const world = twoYards('sensors');
const { leadA, leadB, line, gate, yardA, yardB, plant } = world;
const CAR = 'QTKX1';

function trackside(): Trackside {
  return new Trackside(world.configuration);
}

describe('seen at a lead without direction', () => {
  test('extends an open stay, however long ago it was seen', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.stand(leadA, CAR, '5T09:00');
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('08:00'), lastSeenAt: time('5T09:00') + STOOD_MS, departedAt: null },
    ]);
  });

  test('opens one that was inferred, between its last two sightings', () => {
    const track = trackside().cross(line, CAR, '12:00', 'decreasing').stand(leadA, CAR, '15:00');
    expect(track.stays(CAR)).toMatchObject([
      {
        siteId: yardA,
        arrivedAt: time('15:00'),
        arrivalBasis: 'inferred',
        arrivalBounds: { earliest: time('12:00'), latest: time('15:00') },
      },
    ]);
  });

  test.each([
    ['3T03:00:00.000', '3T03:00:00.000', 'read'],
    ['3T03:00:00.001', '15:00', 'inferred'],
  ])('a crossing in at %s after it: arrived %s, %s', (crossed, arrived, basis) => {
    const track = trackside().cross(line, CAR, '12:00', 'decreasing').stand(leadA, CAR, '15:00');
    track.stand(leadA, CAR, '3T02:00').cross(leadA, CAR, crossed, 'decreasing');
    expect(track.stays(CAR)).toMatchObject([
      { firstSeenAt: time('15:00'), arrivedAt: time(arrived), arrivalBasis: basis },
    ]);
  });

  test('the arrival so set is that of the leg, too', () => {
    const track = trackside().cross(leadB, CAR, '06:00', 'decreasing');
    track.stand(leadA, CAR, '15:00').cross(leadA, CAR, '15:10', 'decreasing');
    expect(track.legs(CAR)).toMatchObject([
      { departedAt: time('06:00'), arrivedAt: time('15:10') },
    ]);
  });

  test.each(['10:05', '10:30'])('at %s, shortly after it went out, means nothing', (clock) => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.cross(leadA, CAR, '10:00', 'increasing').stand(leadA, CAR, clock);
    expect(track.stays(CAR)).toMatchObject([{ departedAt: time('10:00'), excursions: 0 }]);
  });

  test.each(['10:30:00.001', '22:00'])('at %s, later, reopens that stay', (clock) => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.cross(leadA, CAR, '10:00', 'increasing').stand(leadA, CAR, clock);
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('08:00'), departedAt: null, excursions: 1 },
    ]);
  });

  test('after the return time it opens a new stay', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.cross(leadA, CAR, '10:00', 'increasing').stand(leadA, CAR, '22:00:00.001');
    expect(track.stays(CAR)).toMatchObject([
      { departedAt: time('10:00'), departureBasis: 'read' },
      {
        arrivalBasis: 'inferred',
        arrivalBounds: { earliest: time('10:00'), latest: time('22:00:00.001') },
      },
    ]);
  });

  test('at another yard it ends the stay before, inferred', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing').stand(leadB, CAR, '18:00');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardA, departedAt: time('14:40'), departureBasis: 'inferred' },
      { siteId: yardB, arrivedAt: time('18:00'), arrivalBasis: 'inferred' },
    ]);
  });
});

describe('seen without direction between two sites', () => {
  test.each([
    ['yard', yardB],
    ['plant', plant],
  ])('it is where it already was: %s', (_, siteId) => {
    const track = trackside().cross(leadB, CAR, '08:00', 'increasing');
    if (siteId === plant) track.cross(gate, CAR, '09:00', 'increasing');
    track.stand(gate, CAR, '12:00');
    const stays = track.stays(CAR);
    const seen = time('12:00') + STOOD_MS;
    expect(stays.at(-1)).toMatchObject({ siteId, departedAt: null, lastSeenAt: seen });
    expect(stays).toHaveLength(siteId === plant ? 2 : 1);
  });

  test('it is at neither where it was at neither', () => {
    const track = trackside().stand(gate, CAR, '12:00');
    expect(track.stays(CAR)).toEqual([]);
    expect(track.lastSeen(CAR)).toMatchObject({ state: 'enRoute', at: time('12:00') + STOOD_MS });
  });
});

describe('a spot read point', () => {
  function dock() {
    const network = new NetworkBuilder();
    const industry = network.site('QP', { kind: 'industry' });
    const lineSite = network.site('QL', { kind: 'line' });
    const spot = network.readPoint(industry, 'single', {
      kind: 'spot',
      track: 'D1',
      decreasingPlace: at(industry, 'D1'),
      increasingPlace: at(industry, 'D1'),
    });
    const entry = network.readPoint(industry, 'sensors', { decreasingPlace: at(industry) });
    const passing = network.readPoint(lineSite, 'sensors');
    return { industry, spot, entry, passing, track: new Trackside(network.build()) };
  }

  test('opens a stay at once, at its place', () => {
    const { industry, spot, passing, track } = dock();
    track.cross(passing, CAR, '12:00', 'increasing').read(spot, 0, CAR, '15:00');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: industry, track: 'D1', arrivedAt: time('15:00'), arrivalBasis: 'read' },
    ]);
  });

  test('at the first sighting ever nobody knows since when', () => {
    const { spot, track } = dock();
    track.read(spot, 0, CAR, '15:00');
    expect(track.stays(CAR)).toMatchObject([{ arrivedAt: null, arrivalBasis: 'unknown' }]);
  });

  test('says on which track an open stay goes on', () => {
    const { spot, entry, track } = dock();
    track.cross(entry, CAR, '12:00', 'decreasing').read(spot, 0, CAR, '13:00');
    expect(track.stays(CAR)).toMatchObject([{ arrivedAt: time('12:00'), track: 'D1' }]);
    expect(track.lastSeen(CAR)).toMatchObject({ state: 'onHand', track: 'D1' });
  });

  test('seen at the lead afterwards it is still on that track', () => {
    const { spot, entry, track } = dock();
    track.read(spot, 0, CAR, '13:00').stand(entry, CAR, '14:00');
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('14:00') + STOOD_MS, track: 'D1' });
  });

  test('reopens a stay that it seemed to leave minutes ago', () => {
    const { spot, entry, track } = dock();
    track.cross(entry, CAR, '12:00', 'decreasing').cross(entry, CAR, '13:00', 'increasing');
    track.read(spot, 0, CAR, '13:10');
    expect(track.stays(CAR)).toMatchObject([{ departedAt: null, excursions: 1 }]);
  });
});
