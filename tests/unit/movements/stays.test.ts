import { describe, expect, test } from 'vitest';
import { CAR, car } from '../../support/car-between-yards.js';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const world = twoYards('sensors');
const { leadA, yardA, yardB } = world;
const read = { departureBasis: 'read', departureBounds: null };

describe('seen to come and go', () => {
  test('a stay lasts from the crossing in to the crossing out', () => {
    const { track, intoA, outOfA, intoB } = car(world);
    intoA('08:00');
    outOfA('10:00');
    intoB('14:00');
    expect(track.stays(CAR)).toMatchObject([
      {
        siteId: yardA,
        firstSeenAt: time('08:00'),
        arrivedAt: time('08:00'),
        arrivalBasis: 'read',
        arrivalBounds: null,
        departedAt: time('10:00'),
        departureFinalAt: null,
        excursions: 0,
        outOfDwell: false,
        ...read,
      },
      { siteId: yardB, arrivedAt: time('14:00'), arrivalBasis: 'read', departedAt: null },
    ]);
  });

  test('a passage over two minutes out to the line leaves with its last read', () => {
    const { track } = car(world);
    for (const clock of ['10:00:00', '10:00:50', '10:01:40', '10:02:00.001']) {
      track.read(leadA, 0, CAR, clock);
    }
    track.wheels(leadA, '10:00:00', '10:02:01', 'increasing');
    expect(track.stays(CAR)).toMatchObject([{ departedAt: time('10:02:00.001') }]);
  });

  test('one of two minutes exactly leaves with its first', () => {
    const { track } = car(world);
    for (const clock of ['10:00:00', '10:00:50', '10:01:40', '10:02:00']) {
      track.read(leadA, 0, CAR, clock);
    }
    track.wheels(leadA, '10:00:00', '10:02:01', 'increasing');
    expect(track.stays(CAR)).toMatchObject([{ departedAt: time('10:00') }]);
  });

  test('a long passage in arrives with its first read', () => {
    const { track } = car(world);
    for (const clock of ['10:00:00', '10:00:50', '10:01:40', '10:02:30']) {
      track.read(leadA, 0, CAR, clock);
    }
    track.wheels(leadA, '10:00:00', '10:02:31', 'decreasing');
    expect(track.stays(CAR)).toMatchObject([{ arrivedAt: time('10:00'), arrivalBasis: 'read' }]);
  });

  test('a departure is provisional until the return time has passed or it is seen again', () => {
    const { track, intoA, outOfA, intoB } = car(world);
    intoA('08:00');
    outOfA('10:00');
    expect(track.stays(CAR)).toMatchObject([{ departureFinalAt: time('22:00') }]);
    intoB('14:00');
    expect(track.stays(CAR)).toMatchObject([{ departureFinalAt: null }, {}]);
  });
});

describe('switching over the lead', () => {
  test.each(['10:30:00.000', '22:00:00.000'])(
    'back at %s: the stay goes on, one excursion',
    (back) => {
      const { track, intoA, outOfA } = car(world);
      intoA('08:00');
      outOfA('10:00');
      intoA(back);
      expect(track.stays(CAR)).toMatchObject([
        { arrivedAt: time('08:00'), departedAt: null, departureFinalAt: null, excursions: 1 },
      ]);
      expect(track.stays(CAR)).toHaveLength(1);
      expect(track.legs(CAR)).toEqual([]);
    },
  );

  test('back later than the return time: it had left', () => {
    const { track, intoA, outOfA } = car(world);
    intoA('08:00');
    outOfA('10:00');
    intoA('22:00:00.001');
    expect(track.stays(CAR)).toMatchObject([
      { departedAt: time('10:00'), excursions: 0, outOfDwell: false, ...read },
      { arrivedAt: time('22:00:00.001'), arrivalBasis: 'read', departedAt: null },
    ]);
  });

  test('seen elsewhere in between: it had left', () => {
    const { track, intoA, outOfA, overLine } = car(world);
    intoA('08:00');
    outOfA('10:00');
    overLine('11:30');
    intoA('13:00');
    expect(track.stays(CAR)).toMatchObject([
      { departedAt: time('10:00'), ...read },
      { arrivedAt: time('13:00') },
    ]);
  });

  test('the return time is that of the site', () => {
    const short = twoYards('sensors');
    const site = short.configuration.sites.find(({ id }) => id === short.yardA);
    Object.assign(site as object, { returnHours: 1 });
    const track = new Trackside(short.configuration);
    track.cross(short.leadA, CAR, '08:00', 'decreasing');
    track.cross(short.leadA, CAR, '10:00', 'increasing');
    track.cross(short.leadA, CAR, '11:00:00.001', 'decreasing');
    expect(track.stays(CAR)).toHaveLength(2);
  });

  test('drawn out three times it made three excursions', () => {
    const { track, intoA, outOfA } = car(world);
    intoA('08:00');
    for (const hour of ['09', '10', '11']) {
      outOfA(`${hour}:00`);
      intoA(`${hour}:20`);
    }
    outOfA('12:00');
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('08:00'), departedAt: time('12:00'), excursions: 3 },
    ]);
  });
});
