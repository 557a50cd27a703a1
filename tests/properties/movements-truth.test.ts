import { describe, expect, test } from 'vitest';
import { historyOf } from '../../server/domain/movements/history-of.js';
import type { Equipped } from '../support/network-builder.js';
import { addScores, NOTHING, scoreHistory, type Miss, type Score } from '../support/truth-score.js';
import { generateTraffic, twoYards } from '../support/two-yards.js';

const SEEDS = Array.from({ length: 20 }, (_, index) => 4100 + index);
const startsAt = Date.UTC(2026, 2, 2, 4);

/** Floors and ceilings in per cent, a little outside what the rules are said to reach. */
const LIMITS = {
  sensors: { right: 99.1, wrong: 0.15, arrivals: 99.5, departures: 99.2, switched: 1.2 },
  offsets: { right: 99.8, wrong: 0, arrivals: 99.6, departures: 99.6, switched: 0.5 },
  single: { right: 97.5, wrong: 0.1, arrivals: 97.3, departures: 97.4, switched: 0.5 },
};

/** Four days of trains and switching between two yards, a seed at a time. */
function play(equipped: Equipped): { score: Score; misses: string[] } {
  const world = twoYards(equipped);
  const misses: string[] = [];
  let score = NOTHING;
  const line = (seed: number, { what, unit, at }: Miss) => `seed ${seed}: ${what}: ${unit} ${at}`;
  for (const seed of SEEDS) {
    const traffic = generateTraffic(world, seed, { hours: 96, startsAt, cars: 60 });
    const one = scoreHistory(world, traffic, historyOf(traffic, world.configuration));
    score = addScores(score, one.score);
    misses.push(...one.misses.map((miss) => line(seed, miss)));
  }
  return { score, misses };
}

describe.each(['sensors', 'offsets', 'single'] as const)(
  'what really happened, seen by %s',
  (equipped) => {
    const { score, misses } = play(equipped);
    const limits = LIMITS[equipped];
    const percent = (part: number, whole: number) => (100 * part) / whole;
    const seen = `seeds ${SEEDS[0]} to ${SEEDS.at(-1)}: ${JSON.stringify(score)}\n${misses.join('\n')}`;

    test('there was enough of it', () => {
      expect(score.moves).toBeGreaterThan(10_000);
      expect(score.switched).toBeGreaterThan(1000);
      expect(score.arrivals).toBeGreaterThan(5000);
      expect(score.departures).toBeGreaterThan(5000);
    });

    test('directions are right, and hardly ever wrong', () => {
      expect(percent(score.right, score.moves), seen).toBeGreaterThanOrEqual(limits.right);
      expect(percent(score.wrong, score.moves), seen).toBeLessThanOrEqual(limits.wrong);
    });

    test('arrivals and departures are known to the minute', () => {
      const { arrivals, departures } = score;
      const came = percent(score.arrivalsInAMinute, arrivals);
      const left = percent(score.departuresInAMinute, departures);
      expect(came, seen).toBeGreaterThanOrEqual(limits.arrivals);
      expect(left, seen).toBeGreaterThanOrEqual(limits.departures);
    });

    test('cars that were only switched stay where they are', () => {
      const { switched, switchedWithCrossing, departures, falseDepartures } = score;
      expect(percent(switchedWithCrossing, switched), seen).toBeLessThanOrEqual(limits.switched);
      expect(percent(falseDepartures, departures), seen).toBeLessThanOrEqual(0.4);
    });
  },
);
