import { describe, expect, test } from 'vitest';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

// 100 km from yard A to yard B: 46 min 9.2 s at 130 km/h. Yard B to the plant 2 km.
const world = twoYards('sensors');
const { leadA, leadB, line, gate, yardA, yardB } = world;
const CAR = 'QTKX1';

/** In yard A since 08:00, standing at its lead at noon. */
function inYardA(): Trackside {
  return new Trackside(world.configuration).cross(leadA, CAR, '12:00', 'decreasing');
}

describe('two sightings that no train could join', () => {
  test.each([
    ['12:46:09.230', 1],
    ['12:46:09.231', 0],
  ])('at 130 km/h over 100 km: seen again at %s', (clock, doubts) => {
    expect(inYardA().cross(leadB, CAR, clock, 'increasing').doubts(CAR)).toHaveLength(doubts);
  });

  test('the later one does not move it', () => {
    const track = inYardA().cross(leadB, CAR, '12:20', 'increasing');
    expect(track.stays(CAR)).toMatchObject([{ siteId: yardA, departedAt: null }]);
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('12:00'), siteId: yardA });
    expect(track.doubts(CAR)).toEqual([
      {
        at: time('12:20'),
        readPointId: leadB.id,
        previousReadPointId: leadA.id,
        previousAt: time('12:00'),
        railMetres: 100_000,
        corroboratedBy: null,
      },
    ]);
  });

  test('up to 20 km nothing is doubted: a clock may be off', () => {
    const near = twoYards('sensors');
    for (const edge of near.configuration.routeEdges) edge.metres = 10_000;
    const track = new Trackside(near.configuration).cross(near.leadA, CAR, '12:00', 'decreasing');
    expect(track.cross(near.leadB, CAR, '12:00:01', 'increasing').doubts(CAR)).toEqual([]);
  });

  test('its other tag speaks for it', () => {
    const track = inYardA().cross(leadB, CAR, '12:20', 'increasing');
    track.read(leadB, 1, CAR, '12:20', 'right');
    expect(track.doubts(CAR)).toMatchObject([{ corroboratedBy: 'side' }]);
    expect(track.stays(CAR)).toMatchObject([{ siteId: yardA }, { siteId: yardB }]);
  });

  test('a car that was with it both times speaks for it', () => {
    const track = inYardA().cross(leadA, 'QTKX2', '12:00:05', 'decreasing');
    track.cross(leadB, CAR, '12:20', 'increasing').cross(leadB, 'QTKX2', '12:20:05', 'increasing');
    expect(track.doubts(CAR)).toMatchObject([{ corroboratedBy: 'mates' }]);
    expect(track.stays(CAR).at(-1)).toMatchObject({ siteId: yardB, arrivedAt: time('12:20') });
  });

  test('a car that was with it only once does not', () => {
    const track = inYardA().cross(leadB, CAR, '12:20', 'increasing');
    track.cross(leadB, 'QTKX2', '12:20:05', 'increasing');
    expect(track.doubts(CAR)).toMatchObject([{ corroboratedBy: null }]);
  });

  test('a second read point speaks for it, where what was known before does not', () => {
    const track = inYardA().cross(leadB, CAR, '12:20', 'increasing');
    track.cross(gate, CAR, '12:30', 'increasing');
    expect(track.doubts(CAR)).toMatchObject([{ at: time('12:20'), corroboratedBy: 'point' }]);
    expect(track.stays(CAR).map((stay) => [stay.siteId, stay.arrivedAt])).toEqual([
      [yardA, time('12:00')],
      [yardB, time('12:20')],
      [world.plant, time('12:30')],
    ]);
  });

  test('the same read point again does not', () => {
    const track = inYardA().cross(leadB, CAR, '12:20', 'increasing');
    track.cross(leadB, CAR, '12:40', 'decreasing');
    expect(track.doubts(CAR)).toMatchObject([
      { at: time('12:20'), corroboratedBy: null },
      { at: time('12:40'), corroboratedBy: null },
    ]);
    expect(track.stays(CAR)).toMatchObject([{ siteId: yardA, departedAt: null }]);
  });

  test('seen next where it was before, the doubted one stays alone', () => {
    const track = inYardA().cross(leadB, CAR, '12:20', 'increasing');
    track.cross(leadA, CAR, '14:00', 'increasing').cross(line, CAR, '15:00', 'increasing');
    expect(track.doubts(CAR)).toMatchObject([{ corroboratedBy: null }]);
    expect(track.stays(CAR)).toMatchObject([{ siteId: yardA, departedAt: time('14:00') }]);
  });
});
