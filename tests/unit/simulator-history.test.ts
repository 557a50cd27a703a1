import { describe, expect, it } from 'vitest';
import { historyOf } from '../../server/domain/movements/history-of.js';
import { trafficBetween } from '../../server/simulator/traffic.js';
import { strayTruthBetween, truthBetween } from '../../server/simulator/truth-between.js';
import { agreementLine, agreementOf, movedByStrays } from '../support/demo-agreement.js';
import { demoConfiguration, demoLedger, foundIn } from '../support/demo-history.js';

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

  it('agrees with the truth at the site with one antenna, where history tells direction', () => {
    // Cars that are only ever sorted here are seen nowhere else, so that nothing can tell.
    const trains = truth.filter(({ purpose }) => purpose === 'arrive' || purpose === 'depart');
    const agreement = agreementOf(found, trains, 'single');
    console.info(agreementLine('single', agreement));
    const { crossings, directionRight, directionWrong, directionUnknown } = agreement;
    expect(crossings).toBeGreaterThan(100);
    // It hears one side of a train: some have no tag there.
    const read = directionRight + directionWrong + directionUnknown;
    expect(read).toBeGreaterThan(0.8);
    expect(directionRight / read).toBeGreaterThanOrEqual(0.922);
    expect(directionWrong / read).toBeLessThanOrEqual(0.018);
  });

  it.each(['MARTEN', 'MILLRACE'])('agrees with the truth at %s, which has one offset', (site) => {
    const trains = truth.filter((crossing) => crossing.site === site);
    const agreement = agreementOf(found, trains, 'oneOffset');
    expect(agreement.crossings).toBeGreaterThan(150);
    expect(agreement.directionRight).toBeGreaterThanOrEqual(0.99);
    expect(agreement.directionWrong).toBe(0);
  });

  it('knows by reports what came and went where no reader is', () => {
    const kiln = truth.filter(({ site }) => site === 'BRYONY');
    const cars = new Set(kiln.map(({ unit }) => unit).filter((unit) => unit.startsWith('QWKR160')));
    expect(cars.size).toBe(7);
    const missed = kiln.filter(({ unit, purpose, at }) => {
      const stays = found.stays.filter((stay) => stay.unit === unit && stay.site === 'BRYONY');
      const field = purpose === 'arrive' ? 'arrivedAt' : 'departedAt';
      return cars.has(unit) && !stays.some((stay) => stay[field] === at);
    });
    expect(missed).toEqual([]);
  });

  it('lets nothing move that was heard from the next track, from beside it, or standing', () => {
    const strays = strayTruthBetween(from, from + 14 * DAY);
    for (const why of ['parallel', 'beside', 'beam'] as const) {
      const ofKind = strays.filter((stray) => stray.why === why);
      expect(ofKind.length, why).toBeGreaterThan(50);
      expect(movedByStrays(found, ofKind), why).toBe(0);
    }
  });
});
