import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { median, theilSenSlope } from '../../server/domain/statistics/theil-sen.js';

// Theil 1950; Sen, "Estimates of the regression coefficient based on Kendall's tau", 1968.
describe('Theil-Sen slope', () => {
  test('is exact on collinear points', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -50, max: 50 }),
        fc.integer({ min: -1000, max: 1000 }),
        fc.uniqueArray(fc.integer({ min: -500, max: 500 }), { minLength: 2, maxLength: 12 }),
        (slope, intercept, xs) => {
          const points = xs.map((x) => ({ x, y: slope * x + intercept }));
          expect(theilSenSlope(points)).toBeCloseTo(slope, 9);
        },
      ),
      { seed: 1950, numRuns: 200 },
    );
  });

  test('is unmoved by under 29 % outliers, however far off', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 7, max: 25 }),
        fc.integer({ min: -9, max: 9 }),
        fc.infiniteStream(fc.integer({ min: -1_000_000, max: 1_000_000 })),
        (count, slope, far) => {
          // The share 1 - sqrt(1/2) = 0.293 is where half of all pairs are spoilt; of n points,
          // k spoil it while (n-k)(n-k-1) <= n(n-1)/2.
          let spoilt = 0;
          const isRight = (k: number) => (count - k) * (count - k - 1) > (count * (count - 1)) / 2;
          while (isRight(spoilt + 1)) spoilt += 1;
          const points = Array.from({ length: count }, (_, x) => ({
            x,
            y: x < spoilt ? (far.next().value as number) : slope * x,
          }));
          expect(spoilt / count).toBeLessThan(0.293);
          expect(theilSenSlope(points)).toBe(slope);
        },
      ),
      { seed: 1968, numRuns: 200 },
    );
  });

  test('two outliers among ten points change nothing', () => {
    const points = [0, 1, 2, 3, 4, 5, 6, 7, 8, 9].map((x) => ({ x, y: 3 * x + 1 }));
    points[2] = { x: 2, y: 10_000 };
    points[7] = { x: 7, y: -10_000 };
    expect(theilSenSlope(points)).toBe(3);
  });

  test('tells nothing of points at one place', () => {
    expect(theilSenSlope([])).toBeNull();
    expect(theilSenSlope([{ x: 1, y: 5 }])).toBeNull();
    expect(
      theilSenSlope([
        { x: 1, y: 5 },
        { x: 1, y: 9 },
      ]),
    ).toBeNull();
  });
});

describe('median', () => {
  test.each([
    [[], null],
    [[7], 7],
    [[9, -2, 4], 4],
    [[1, 100, 3, 2], 2.5],
    [[10, 9, 2, 1], 5.5],
  ])('of %j is %j', (values, middle) => {
    expect(median(values)).toBe(middle);
  });
});
