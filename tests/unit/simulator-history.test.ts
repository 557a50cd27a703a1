import { describe, expect, it } from 'vitest';
import { historyOf } from '../../server/domain/movements/history-of.js';
import { trafficBetween } from '../../server/simulator/traffic.js';
import { truthBetween } from '../../server/simulator/truth-between.js';
import {
  agreementLine,
  agreementOf,
  demoConfiguration,
  demoLedger,
  foundIn,
} from '../support/demo-history.js';

const DAY = 86_400_000;

/** The floors are the figures that the rules of movement name as reached. */
describe('what the rules make of two weeks of invented traffic', () => {
  const from = Date.UTC(2026, 1, 9);
  const truth = truthBetween(from, from + 14 * DAY);
  const sent = trafficBetween(from, from + 14 * DAY + 10_000);
  const found = foundIn(historyOf(demoLedger(sent), demoConfiguration()));

  it.each([
    ['sensors', 0.992, 0.0015, 0.996, 0.993],
    ['twoOffsets', 0.999, 0, 0.997, 0.997],
  ] as const)('agrees with the truth at %s', (equipment, right, wrong, arrivals, departures) => {
    const agreement = agreementOf(found, truth, equipment);
    console.info(agreementLine(equipment, agreement));
    expect(agreement.crossings).toBeGreaterThan(10_000);
    expect(agreement.directionRight).toBeGreaterThanOrEqual(right);
    expect(agreement.directionWrong).toBeLessThanOrEqual(wrong);
    expect(agreement.arrivals).toBeGreaterThanOrEqual(arrivals);
    expect(agreement.departures).toBeGreaterThanOrEqual(departures);
  });
});
