import { describe, expect, test } from 'vitest';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const world = twoYards('sensors');
const { leadA, leadB, yardA, yardB, plant } = world;
const CAR = 'QTKX1';

const trackside = () => new Trackside(world.configuration);

describe('reported arrived', () => {
  test('where no reader saw it, it arrived then', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'increasing');
    track.report(plant, 'arrived', CAR, '15:00');
    expect(track.stays(CAR).at(-1)).toMatchObject({
      siteId: plant,
      arrivedAt: time('15:00'),
      arrivalBasis: 'report',
      arrivalBounds: null,
      departedAt: null,
    });
    expect(track.lastSeen(CAR)).toMatchObject({
      state: 'onHand',
      siteId: plant,
      basis: 'report',
      readPointId: null,
      pass: null,
    });
  });

  test('a car that nobody had heard of is known from then on', () => {
    const track = trackside().report(plant, 'arrived', CAR, '15:00');
    expect(track.stays(CAR)).toMatchObject([{ siteId: plant, arrivalBasis: 'report' }]);
  });

  test('where it is known to be, nothing changes but when it was last heard of', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardA, 'arrived', CAR, '09:00');
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('08:00'), arrivalBasis: 'read', lastSeenAt: time('09:00') },
    ]);
  });

  test('gives way to a crossing in that is read soon after', () => {
    const track = trackside().report(yardA, 'arrived', CAR, '07:50');
    track.cross(leadA, CAR, '08:00', 'decreasing');
    expect(track.stays(CAR)).toMatchObject([{ arrivedAt: time('08:00'), arrivalBasis: 'read' }]);
  });

  test('where no train could have brought it, moves nothing', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardB, 'arrived', CAR, '08:20');
    expect(track.stays(CAR)).toMatchObject([{ siteId: yardA, departedAt: null }]);
  });
});

describe('reported departed', () => {
  test('ends the stay then, provisional as any departure', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardA, 'departed', CAR, '16:00');
    expect(track.stays(CAR)).toMatchObject([
      {
        departedAt: time('16:00'),
        departureBasis: 'report',
        departureBounds: null,
        departureFinalAt: time('3T04:00'),
      },
    ]);
    expect(track.lastSeen(CAR)).toMatchObject({ state: 'enRoute', siteId: yardA });
  });

  test('gives way to the same departure read later, without an excursion', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardA, 'departed', CAR, '15:50').cross(leadA, CAR, '16:00', 'increasing');
    expect(track.stays(CAR)).toMatchObject([
      { departedAt: time('16:00'), departureBasis: 'read', excursions: 0 },
    ]);
  });

  test('after the departure was read it says nothing new', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.cross(leadA, CAR, '16:00', 'increasing').report(yardA, 'departed', CAR, '16:05');
    expect(track.stays(CAR)).toMatchObject([{ departedAt: time('16:00'), departureBasis: 'read' }]);
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('16:00'), basis: 'read' });
  });
});

describe('other reports', () => {
  test.each(['placed', 'released', 'pulled', 'loaded', 'badOrdered'] as const)(
    '%s: it was there',
    (event) => {
      const track = trackside().cross(leadA, CAR, '08:00', 'increasing');
      track.report(plant, event, CAR, '15:00', { track: '7' });
      expect(track.stays(CAR).at(-1)).toMatchObject({
        siteId: plant,
        track: '7',
        arrivalBasis: 'inferred',
        arrivalBounds: { earliest: time('08:00'), latest: time('15:00') },
      });
    },
  );
});

describe('seen by eye', () => {
  test('says on which track it stands', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardA, 'seen', CAR, '10:00', { basis: 'hand', track: '4' });
    expect(track.stays(CAR)).toMatchObject([{ track: '4', departedAt: null }]);
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('10:00'), basis: 'hand' });
  });

  test('not there: the ghost has left at some time since it was last seen', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardA, 'notThere', CAR, '4T10:00', { basis: 'hand' });
    expect(track.stays(CAR)).toMatchObject([
      {
        departedAt: time('4T10:00'),
        departureBasis: 'hand',
        departureBounds: { earliest: time('08:00'), latest: time('4T10:00') },
        outOfDwell: true,
      },
    ]);
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('08:00'), state: 'enRoute' });
  });

  test('not there where it never was says nothing', () => {
    const track = trackside().cross(leadA, CAR, '08:00', 'decreasing');
    track.report(yardB, 'notThere', CAR, '4T10:00', { basis: 'hand' });
    expect(track.stays(CAR)).toMatchObject([{ siteId: yardA, departedAt: null }]);
  });

  test('read at the same instant, the reader is heard first', () => {
    const track = trackside().cross(leadB, CAR, '08:00', 'increasing');
    track.report(yardB, 'seen', CAR, '08:00', { basis: 'hand', track: '2' });
    expect(track.stays(CAR)).toMatchObject([{ arrivedAt: time('08:00'), arrivalBasis: 'read' }]);
  });
});
