import { describe, expect, test } from 'vitest';
import { STOOD_MS, Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const CAR = 'QTKX1';
const world = twoYards('sensors');
const offsets = twoYards('offsets');

describe('a car that stops astride the reader and goes on', () => {
  test('leaves once, at its first read, without an excursion', () => {
    const track = new Trackside(world.configuration).cross(world.leadA, CAR, '08:00', 'decreasing');
    track.wheels(world.leadA, '10:00', '10:05', 'increasing');
    track.read(world.leadA, 0, CAR, '10:01:00').read(world.leadA, 1, CAR, '10:03:00', 'right');
    expect(track.stays(CAR)).toMatchObject([{ excursions: 0 }]);
  });
  test('makes no ghost stay between two sites', () => {
    const track = new Trackside(world.configuration).cross(world.leadB, CAR, '08:00', 'increasing');
    track.wheels(world.gate, '10:00', '10:05', 'increasing');
    track.read(world.gate, 0, CAR, '10:01:00').read(world.gate, 1, CAR, '10:03:00', 'right');
    expect(track.stays(CAR).map((s) => [s.siteId, s.arrivedAt, s.departedAt])).toEqual([
      [world.yardB, time('08:00'), time('10:01')],
      [world.plant, time('10:01'), null],
    ]);
  });
});

describe('a gap of hours is no reversal', () => {
  test('the last car of a train, without own direction, crosses with it', () => {
    const track = new Trackside(offsets.configuration).cross(
      offsets.leadA,
      'QTKX1',
      '10:00:00',
      'increasing',
    );
    track.read(offsets.leadA, 0, 'QTKX2', '10:00:05');
    const before = track.passes(offsets.leadA);
    expect(before[0]?.members[1]).toMatchObject({ role: 'crossing', direction: 'increasing' });
    track.cross(offsets.leadA, 'QTKX3', '9T15:00', 'decreasing');
    const [first, second] = track.passes(offsets.leadA);
    expect(second?.reversal).toBe(false);
    expect(first?.members[1]).toMatchObject({ role: 'crossing', direction: 'increasing' });
  });
});

describe('seen between two other sites', () => {
  test('it is not on hand where it was before', () => {
    const track = new Trackside(world.configuration).cross(world.leadA, CAR, '08:00', 'decreasing');
    track.stand(world.gate, CAR, '16:00').cross(world.leadB, CAR, '20:00', 'increasing');
    expect(track.stays(CAR)[0]).toMatchObject({
      siteId: world.yardA,
      departureBounds: { earliest: time('08:00'), latest: time('16:00') },
    });
  });
  test('last seen is not yard A', () => {
    const track = new Trackside(world.configuration).cross(world.leadA, CAR, '08:00', 'decreasing');
    track.stand(world.gate, CAR, '16:00');
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('16:00') + STOOD_MS, state: 'enRoute' });
  });
});

describe('outward elsewhere with a stay open', () => {
  test('the departure counts back from the next sighting', () => {
    const track = new Trackside(world.configuration).cross(world.leadB, CAR, '08:00', 'increasing');
    track.cross(world.leadA, CAR, '3T08:00', 'increasing');
    expect(track.stays(CAR).map((s) => [s.siteId, s.arrivedAt, s.departedAt])).toEqual([
      [world.yardB, time('08:00'), time('3T04:40')],
      [world.yardA, time('3T08:00'), time('3T08:00')],
    ]);
  });
});

describe('provisional', () => {
  test('ends when anything later is known', () => {
    const track = new Trackside(world.configuration).cross(world.leadA, CAR, '08:00', 'increasing');
    track.stand(world.gate, CAR, '12:00');
    expect(track.stays(CAR)).toMatchObject([{ departureFinalAt: null }]);
  });
});

describe('returned by tags', () => {
  test('only where the read point has one offset', () => {
    const { leadA } = offsets;
    const track = new Trackside(offsets.configuration)
      .read(leadA, 0, CAR, '10:00:00')
      .read(leadA, 1, CAR, '10:00:05', 'right')
      .read(leadA, 0, CAR, '10:00:12');
    expect(track.passes(leadA)[0]?.members).toMatchObject([{ role: 'presence' }]);
  });
});

describe('inward over a gate with the stay beyond it open', () => {
  test('under the return time the stay goes on', () => {
    const track = new Trackside(world.configuration)
      .cross(world.leadB, CAR, '08:00', 'increasing')
      .cross(world.gate, CAR, '10:00', 'increasing')
      .cross(world.gate, CAR, '12:00', 'increasing');
    expect(track.stays(CAR).map((s) => [s.siteId, s.arrivedAt, s.departedAt])).toEqual([
      [world.yardB, time('08:00'), time('10:00')],
      [world.plant, time('10:00'), null],
    ]);
  });
});

describe('leg over a gate seen without direction', () => {
  test('counts the place where it was seen', () => {
    const track = new Trackside(world.configuration)
      .cross(world.leadA, CAR, '08:00', 'increasing')
      .stand(world.gate, CAR, '12:00')
      .cross(world.leadA, CAR, '20:00', 'decreasing');
    expect(track.legs(CAR)).toMatchObject([{ railMetres: 200_000 }]);
  });
});
