import { describe, expect, test } from 'vitest';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

// 100 km at 30 km/h from yard A to yard B: 3 h 20 min.
const world = twoYards('sensors');
const { leadA, leadB, yardA } = world;
const CAR = 'QTKX1';
const MATES = ['QTKX2', 'QTKX3', 'QTKX4'] as const;

/** All in yard A since 08:00; into yard B at 18:00. How they left is up to the test. */
function trip(leaving: Record<string, string>): Trackside {
  const track = new Trackside(world.configuration);
  [CAR, ...MATES].forEach((car, index) => {
    track.cross(leadA, car, `08:00:0${index}`, 'decreasing');
    track.cross(leadB, car, `18:00:0${index}`, 'increasing');
  });
  for (const [car, clock] of Object.entries(leaving)) track.cross(leadA, car, clock, 'increasing');
  return track;
}

const departure = (track: Trackside) =>
  track.stays(CAR).find((stay) => stay.siteId === yardA)?.departedAt;

describe('a car that nobody saw leave', () => {
  test('left with those that it comes with: the lower median of their departures', () => {
    const track = trip({ QTKX2: '12:00:05', QTKX3: '12:00:20', QTKX4: '12:00:10' });
    expect(departure(track)).toBe(time('12:00:10'));
    expect(track.stays(CAR)[0]).toMatchObject({
      departureBasis: 'inferred',
      departureBounds: { earliest: time('08:00'), latest: time('18:00') },
    });
  });

  test('two of three are at least half; of two the lower', () => {
    const track = trip({ QTKX2: '12:00:05', QTKX3: '12:00:20' });
    expect(departure(track)).toBe(time('12:00:05'));
  });

  test('one of three is not: as the reference speed has it', () => {
    expect(departure(trip({ QTKX2: '12:00:05' }))).toBe(time('14:40'));
  });

  test('those that left another site do not count', () => {
    const track = new Trackside(world.configuration).cross(leadA, CAR, '08:00', 'decreasing');
    track.cross(leadB, 'QTKX2', '12:00', 'decreasing');
    track.cross(leadB, CAR, '18:00:00', 'increasing');
    track.cross(leadB, 'QTKX2', '18:00:05', 'increasing');
    expect(departure(track)).toBe(time('14:40'));
  });

  test('never before it was last seen', () => {
    const track = trip({ QTKX2: '12:00:05', QTKX3: '12:00:20', QTKX4: '12:00:10' });
    track.stand(leadA, CAR, '13:00');
    expect(departure(track)).toBe(time('13:01:01'));
  });
});
