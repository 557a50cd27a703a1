import { describe, expect, test } from 'vitest';
import { CAR, car } from '../../support/car-between-yards.js';
import { STOOD_MS, Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

// Yard A - 40 km - line point L - 60 km - yard B. At 30 km/h: A-L 80 min, L-B 120, A-B 200.
const world = twoYards('sensors');
const { leadA, yardA, yardB } = world;
const read = { departureBasis: 'read', departureBounds: null };

describe('crossings that nobody saw', () => {
  test('inward twice under the return time: the stay goes on', () => {
    const { track, intoA } = car(world);
    intoA('08:00');
    intoA('19:59:59.999');
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('08:00'), departedAt: null, excursions: 0 },
    ]);
  });

  test('inward twice after it: an exit in the middle of the bounds, left out of dwell', () => {
    const { track, intoA } = car(world);
    intoA('08:00');
    intoA('20:00');
    expect(track.stays(CAR)).toMatchObject([
      {
        arrivedAt: time('08:00'),
        departedAt: time('14:00'),
        departureBasis: 'inferred',
        departureBounds: { earliest: time('08:00'), latest: time('20:00') },
        outOfDwell: true,
      },
      { arrivedAt: time('20:00'), arrivalBasis: 'read', departedAt: null },
    ]);
  });

  test('outward twice: the first is kept, the second had arrived from where it was seen', () => {
    const { track, intoA, outOfA, overLine } = car(world);
    intoA('08:00');
    outOfA('10:00');
    overLine('12:00');
    outOfA('3T10:00');
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('08:00'), departedAt: time('10:00'), ...read },
      {
        // 40 km from L at 30 km/h.
        arrivedAt: time('13:20'),
        arrivalBasis: 'inferred',
        arrivalBounds: { earliest: time('12:00'), latest: time('3T10:00') },
        departedAt: time('3T10:00'),
        departureFinalAt: time('3T22:00'),
        ...read,
      },
    ]);
  });

  test('that arrival is never later than the departure', () => {
    const { track, outOfA, overLine } = car(world);
    overLine('12:00');
    outOfA('12:40');
    expect(track.stays(CAR)).toMatchObject([
      { arrivedAt: time('12:40'), departedAt: time('12:40'), arrivalBasis: 'inferred' },
    ]);
  });

  test('outward twice at one lead after the return time: it came back right after it left', () => {
    const { track, intoA, outOfA } = car(world);
    intoA('08:00');
    outOfA('10:00');
    outOfA('3T10:00');
    expect(track.stays(CAR)).toMatchObject([
      { departedAt: time('10:00'), ...read },
      {
        arrivedAt: time('10:00'),
        arrivalBounds: { earliest: time('10:00'), latest: time('3T10:00') },
        departedAt: time('3T10:00'),
      },
    ]);
  });

  test.each([
    // 200 min before the arrival at B; not before it was last seen at A.
    ['18:00', '14:40'],
    ['10:00', '08:00'],
  ])('seen at another yard at %s: it had left by %s', (arrived, left) => {
    const { track, intoA, intoB } = car(world);
    intoA('08:00');
    intoB(arrived);
    expect(track.stays(CAR)).toMatchObject([
      {
        siteId: yardA,
        departedAt: time(left),
        departureBasis: 'inferred',
        departureBounds: { earliest: time('08:00'), latest: time(arrived) },
        outOfDwell: false,
      },
      { siteId: yardB, arrivedAt: time(arrived), arrivalBasis: 'read' },
    ]);
  });

  test('it had not left before it was last seen there', () => {
    const { track, intoA, intoB } = car(world);
    intoA('08:00');
    track.stand(leadA, CAR, '16:00');
    intoB('18:00');
    expect(track.stays(CAR)).toMatchObject([
      {
        departedAt: time('16:00') + STOOD_MS,
        departureBounds: { earliest: time('16:00') + STOOD_MS, latest: time('18:00') },
      },
      {},
    ]);
  });

  test('seen at a line point: it had left, 40 km before', () => {
    const { track, intoA, overLine } = car(world);
    intoA('08:00');
    overLine('12:00');
    expect(track.stays(CAR)).toMatchObject([
      { departedAt: time('10:40'), departureBasis: 'inferred', departureFinalAt: null },
    ]);
    expect(track.lastSeen(CAR)).toMatchObject({ state: 'enRoute', arrivedAt: null });
  });

  test('where no rail joins the two sites it left when it was seen again', () => {
    const world2 = twoYards('sensors');
    world2.configuration.routeEdges.length = 0;
    const track = new Trackside(world2.configuration);
    track.cross(world2.leadA, CAR, '08:00', 'decreasing');
    track.cross(world2.leadB, CAR, '18:00', 'increasing');
    expect(track.stays(CAR)).toMatchObject([{ departedAt: time('18:00') }, {}]);
  });
});

describe('the first sighting ever', () => {
  test.each(['increasing', null] as const)(
    'going %s: nobody knows since when it stood',
    (going) => {
      const { track, outOfA } = car(world);
      if (going) outOfA('10:00');
      else track.read(leadA, 0, CAR, '10:00');
      expect(track.stays(CAR)).toMatchObject([
        {
          siteId: yardA,
          firstSeenAt: time('10:00'),
          arrivedAt: null,
          arrivalBasis: 'unknown',
          arrivalBounds: { earliest: null, latest: time('10:00') },
          departedAt: going ? time('10:00') : null,
        },
      ]);
    },
  );

  test('dwell counts from it where the arrival is unknown', () => {
    const { track } = car(world);
    track.read(leadA, 0, CAR, '10:00');
    // 48 h dwell limit.
    expect(track.lastSeen(CAR)).toMatchObject({ arrivedAt: null, limitAt: time('4T10:00') });
  });

  test('a crossing in is an arrival that was read', () => {
    const { track, intoA } = car(world);
    intoA('10:00');
    expect(track.stays(CAR)).toMatchObject([{ arrivedAt: time('10:00'), arrivalBasis: 'read' }]);
  });

  test('at a line point it has no stay', () => {
    const { track, overLine } = car(world);
    overLine('10:00');
    expect(track.stays(CAR)).toEqual([]);
    expect(track.lastSeen(CAR)).toMatchObject({ state: 'enRoute', staySiteId: null });
  });
});
