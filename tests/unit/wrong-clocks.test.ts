import { describe, expect, test } from 'vitest';
import { underWrongClocks } from '../../server/domain/statistics/wrong-clocks.js';

const HOUR = 3_600_000;
/** Unit n in doubt at a site after so many hours. */
const doubt = (unitId: number, hours: number, siteId = 1) => ({ unitId, siteId, at: hours * HOUR });

describe('sightings that a wrong clock of their site would explain', () => {
  test('are five units or more within a day at one site', () => {
    const crowd = [1, 2, 3, 4, 5].map((unit) => doubt(unit, unit * 6));
    expect([...underWrongClocks(crowd)]).toEqual(crowd);
  });

  test('are not four, nor five at two sites, nor one unit five times', () => {
    const four = [1, 2, 3, 4].map((unit) => doubt(unit, unit));
    expect(underWrongClocks(four).size).toBe(0);
    expect(underWrongClocks([...four, doubt(5, 1, 2)]).size).toBe(0);
    expect(underWrongClocks([1, 2, 3, 4, 5].map((hour) => doubt(1, hour))).size).toBe(0);
  });

  test('are all of the day, whatever order they come in, and none of the days around it', () => {
    const crowd = [24, 30, 36, 42, 48].map((hours, index) => doubt(index + 1, hours));
    const again = doubt(1, 47);
    const [before, after] = [doubt(6, 10), doubt(7, 73)];
    const found = underWrongClocks([after, again, ...crowd.toReversed(), before]);
    expect(found).toEqual(new Set([...crowd, again]));
  });

  test('are none when five lie a little over a day apart', () => {
    const spread = [0, 6, 12, 18, 24.01].map((hours, index) => doubt(index + 1, hours));
    expect(underWrongClocks(spread).size).toBe(0);
    expect(underWrongClocks([...spread, doubt(6, 30)]).size).toBe(5);
  });
});
