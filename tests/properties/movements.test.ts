import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { Network, type Configuration } from '../../server/domain/movements/configuration.js';
import { foldHistory } from '../../server/domain/movements/fold-history.js';
import { nothingKnown } from '../../server/domain/movements/fold-state.js';
import { sightingsByUnit, companionsIn } from '../../server/domain/movements/unit-facts.js';
import { historyOf, type Ledger } from '../../server/domain/movements/history-of.js';
import { pointRules } from '../../server/domain/movements/passages.js';
import {
  formPasses,
  isUndirected,
  withHistory,
  type Pass,
} from '../../server/domain/movements/passes.js';
import type { LedgerRead } from '../../server/domain/movements/resolve-read.js';
import { mergeVisits, visitsOf } from '../../server/domain/movements/visits.js';
import { dumpOf, rowsOf } from '../support/dump-history.js';
import type { Equipped } from '../support/network-builder.js';
import { SeededRandom } from '../support/seeded-random.js';
import { generateTraffic, twoYards, type TwoYards } from '../support/two-yards.js';

const startsAt = Date.UTC(2026, 2, 2, 4);
const seeds = fc.nat(1_000_000);
const equipped = fc.constantFrom<Equipped>('sensors', 'offsets', 'single');

/** Twelve hours of trains, of which `strayShare` of the reads are said to come from elsewhere. */
function day(
  kind: Equipped,
  seed: number,
  strayShare: number,
): { world: TwoYards; ledger: Ledger } {
  const world = twoYards(kind);
  const { reads, wheels } = generateTraffic(world, seed, { hours: 12, startsAt, cars: 24 });
  const random = new SeededRandom(seed + 1);
  const antennas = world.configuration.antennas;
  const strayed = reads.map((read): LedgerRead => {
    if (!random.chance(strayShare)) return read;
    const { siteId, number: antenna } = antennas[random.whole(0, antennas.length - 1)] as never;
    return { ...read, siteId, antenna, at: read.at + random.whole(-900_000, 900_000) };
  });
  return { world, ledger: { reads: strayed, wheels } };
}

/** The same facts and settings in another order, some of the facts more than once. */
function disordered(ledger: Ledger, configuration: Configuration, random: SeededRandom) {
  const again = <T>(items: readonly T[]) => items.filter(() => random.chance(0.3));
  const reads = random.shuffled([...ledger.reads, ...again(ledger.reads)]);
  const wheels = random.shuffled([...ledger.wheels, ...again(ledger.wheels)]);
  const settings = Object.fromEntries(
    Object.entries(configuration).map(([name, list]) => [name, random.shuffled(list as unknown[])]),
  ) as unknown as Configuration;
  return { ledger: { reads, wheels }, configuration: settings };
}

function keyOf({ siteId, antenna, at, tag }: LedgerRead): string {
  return `${siteId} ${antenna} ${at} ${tag}`;
}

describe('history', () => {
  test('is the same whatever the order of ledger and settings, and however often a fact comes', () => {
    const sizes: number[] = [];
    fc.assert(
      fc.property(equipped, seeds, (kind, seed) => {
        const { world, ledger } = day(kind, seed, 0.02);
        fc.pre(ledger.reads.length >= 300);
        sizes.push(ledger.reads.length);
        const other = disordered(ledger, world.configuration, new SeededRandom(seed + 2));
        expect(dumpOf(other.ledger, other.configuration)).toEqual(
          dumpOf(ledger, world.configuration),
        );
      }),
      { seed: 4301, numRuns: 200 },
    );
    expect(sizes).toHaveLength(200);
    expect(Math.min(...sizes)).toBeGreaterThanOrEqual(300);
  });

  test('has every read in exactly one passage, and each unit once in a pass', () => {
    fc.assert(
      fc.property(equipped, seeds, (kind, seed) => {
        const { world, ledger } = day(kind, seed, 0.1);
        const history = historyOf(ledger, world.configuration);
        const told = [...history.passes].flatMap(([readPointId, passes]) =>
          passes.flatMap(({ members }) => {
            const units = members.map(({ passage }) => passage.unit);
            expect(new Set(units).size).toBe(units.length);
            const siteId = world.configuration.readPoints.find(
              ({ id }) => id === readPointId,
            )?.siteId;
            return members
              .flatMap(({ passage }) => passage.visits)
              .flatMap(({ reads }) => reads ?? [])
              .map((read) => keyOf({ siteId: siteId as number, holdCode: null, ...read }));
          }),
        );
        const given = new Set(ledger.reads.map(keyOf));
        const counted = rowsOf(history).passages.reduce((sum, row) => sum + row.readCount, 0);
        expect(new Set(told).size).toBe(told.length);
        expect(told.every((key) => given.has(key))).toBe(true);
        expect(counted).toBe(given.size);
      }),
      { seed: 4302, numRuns: 60 },
    );
  });

  test('has passes in order, told apart by start and ordinal', () => {
    fc.assert(
      fc.property(equipped, seeds, (kind, seed) => {
        const { world, ledger } = day(kind, seed, 0.1);
        for (const passes of historyOf(ledger, world.configuration).passes.values()) {
          const keys = passes.map(({ startedAt, ordinal }) => `${startedAt} ${ordinal}`);
          expect(new Set(keys).size).toBe(keys.length);
          const starts = passes.map(({ startedAt }) => startedAt);
          expect(starts).toEqual([...starts].sort((a, b) => a - b));
        }
      }),
      { seed: 4303, numRuns: 60 },
    );
  });

  test('has stays of a unit one after another, and a leg between any two of them', () => {
    fc.assert(
      fc.property(equipped, seeds, (kind, seed) => {
        const { world, ledger } = day(kind, seed, 0);
        for (const { stays, legs, lastSeen } of historyOf(
          ledger,
          world.configuration,
        ).units.values()) {
          stays.forEach(({ arrivedAt, departedAt, siteId }, index) => {
            const next = stays[index + 1];
            if (arrivedAt !== null && departedAt !== null) {
              expect(departedAt).toBeGreaterThanOrEqual(arrivedAt);
            }
            // Only the last one is open.
            if (next) expect(departedAt).not.toBeNull();
            if (next?.arrivedAt != null) {
              expect(next.arrivedAt).toBeGreaterThanOrEqual(departedAt as number);
            }
            if (!next) return;
            expect(legs[index]).toMatchObject({
              fromSiteId: siteId,
              toSiteId: next.siteId,
              departedAt,
              arrivedAt: next.arrivedAt,
            });
          });
          expect(legs).toHaveLength(Math.max(stays.length - 1, 0));
          expect(lastSeen?.state).toBe(stays.at(-1)?.departedAt === null ? 'onHand' : 'enRoute');
        }
      }),
      { seed: 4304, numRuns: 60 },
    );
  });
});

describe('what the running projections build on', () => {
  test('visits merged from parts are the visits of the whole', () => {
    const forms = { reads: 0, groups: 0 };
    fc.assert(
      fc.property(
        seeds,
        fc.integer({ min: 1, max: 600 }),
        fc.integer({ min: 1, max: 9 }),
        (seed, count, parts) => {
          const random = new SeededRandom(seed);
          const gapMs = random.whole(500, 30_000);
          const drawn = Array.from({ length: count }, () => ({
            at: random.whole(0, 40_000) * 25,
            antenna: random.whole(1, 3),
            tag: random.chance(0.5) ? 'A' : 'B',
          }));
          const reads = [...new Map(drawn.map((read) => [JSON.stringify(read), read])).values()];
          const pieces = Array.from({ length: parts }, (_, part) =>
            reads.filter((_read, index) => index % parts === part),
          );
          const merged = pieces.reduce<ReturnType<typeof visitsOf>>(
            (visits, piece) => mergeVisits([...visits, ...visitsOf('unit', piece, gapMs)], gapMs),
            [],
          );
          expect(merged).toEqual(visitsOf('unit', reads, gapMs));
          for (const { evidence } of merged) forms[evidence.reads ? 'reads' : 'groups'] += 1;
        },
      ),
      { seed: 4305, numRuns: 100 },
    );
    expect(forms.reads).toBeGreaterThan(100);
    expect(forms.groups).toBeGreaterThan(10);
  });

  test('the rules of passes may start afresh at every clean start', () => {
    let starts = 0;
    fc.assert(
      fc.property(equipped, seeds, (kind, seed) => {
        const { world, ledger } = day(kind, seed, 0.05);
        const network = new Network(world.configuration);
        for (const [readPointId, passes] of historyOf(ledger, world.configuration).passes) {
          const wheels = ledger.wheels.filter((record) => record.readPointId === readPointId);
          const rules = pointRules(network, network.readPoint(readPointId), wheels);
          const passages = passes.map(({ members }) => members.map(({ passage }) => passage));
          passes.forEach(({ cleanStart, reversal }, index) => {
            if (!cleanStart) return;
            starts += 1;
            const again = formPasses(rules, passages.slice(index).flat(), { reversal });
            // What history adds to them it tells from other read points.
            expect(again).toEqual(passes.slice(index).map(withoutHistory));
          });
        }
      }),
      { seed: 4306, numRuns: 25 },
    );
    expect(starts).toBeGreaterThan(200);
  });

  test('a fold that starts at a checkpoint ends where the whole one does', () => {
    let checked = 0;
    fc.assert(
      fc.property(equipped, seeds, (kind, seed) => {
        const { world, ledger } = day(kind, seed, 0.05);
        const network = new Network(world.configuration);
        const units = sightingsByUnit(network, historyOf(ledger, world.configuration).passes);
        const companionsOf = companionsIn(network, units);
        const car = { kind: 'car', registered: true } as const;
        for (const [unit, sightings] of units) {
          const companions = companionsOf(unit);
          const whole = foldHistory(network, car, nothingKnown(), sightings, companions);
          for (const { beforeAt, state } of whole.checkpoints) {
            const rest = sightings.filter(({ firstAt }) => firstAt >= beforeAt);
            const part = foldHistory(network, car, state, rest, companions);
            expect(part.lastSeen).toEqual(whole.lastSeen);
            expect(part.stays).toEqual(whole.stays.slice(whole.stays.length - part.stays.length));
            expect(part.legs).toEqual(whole.legs.slice(whole.legs.length - part.legs.length));
            checked += 1;
          }
        }
      }),
      { seed: 4307, numRuns: 40 },
    );
    expect(checked).toBeGreaterThan(1000);
  });
});

function withoutHistory(pass: Pass): Pass {
  return isUndirected(pass) ? withHistory(pass, null) : pass;
}
