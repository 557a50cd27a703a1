import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { reportEvents } from '../../server/contract/movement-reports.js';
import type { Ledger, LedgerReport } from '../../server/domain/movements/history-of.js';
import type { LedgerRead } from '../../server/domain/movements/resolve-read.js';
import { at, NetworkBuilder, type BuiltPoint, type Equipped } from './network-builder.js';
import { SeededRandom } from './seeded-random.js';

const STARTS_AT = Date.UTC(2026, 2, 4, 5);
const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;

/**
 * A small network with every kind of read point, and reads that no railway would send: units that
 * stand, turn, come twice, tie in time, and gaps around every limit of the rules.
 */
export function disorderedCase(seed: number, least: number, { reported = false } = {}) {
  const random = new SeededRandom(seed);
  const { configuration, points, besides } = oddNetwork(random);
  const units = oddUnits();
  const reads: LedgerRead[] = [];
  const wheels: Ledger['wheels'][number][] = [];
  let time = STARTS_AT;
  while (reads.length < least) {
    time += gap(random);
    const point = random.pick(points);
    const train = random.chance(0.2) ? [random.pick(units)] : random.shuffled(units);
    const cut = train.slice(0, random.whole(1, train.length));
    const direction = random.chance(0.5) ? 1 : -1;
    const startedAt = time;
    const beside = random.chance(0.5) ? besides.get(point) : undefined;
    for (const unit of cut) {
      reads.push(...goBy(random, point, unit, direction, time));
      if (beside && random.chance(0.6)) {
        const later = time + random.whole(-35_000, 35_000);
        reads.push(...goBy(random, beside, unit, direction, later).slice(0, random.whole(1, 9)));
      }
      time += random.chance(0.3) ? 0 : random.whole(200, 9_000);
      if (random.chance(0.05)) time += gap(random);
    }
    if (point.kind === 'sensors' && random.chance(0.7)) {
      const told = direction > 0 ? ('increasing' as const) : ('decreasing' as const);
      wheels.push({
        readPointId: point.id,
        startedAt: startedAt - 1000,
        endedAt: time + random.whole(-5_000, 5_000) + 6_000,
        direction: random.chance(0.8) ? told : null,
        speedKmh: random.chance(0.5) ? random.whole(5, 60) : null,
        axles: cut.length * 4,
      });
    }
  }
  const reports = reported ? oddReports(random, time, least) : [];
  const ledger: Ledger = { reads: onceEach(reads), wheels: onceEachRecord(wheels), reports };
  return { configuration, ledger };
}

const REPORTED = ['QTKX1', 'QTKX2', 'QTKX5', 'QLR70', 'QBLX77', 'QTKX99'];

/** What railroads and clerks say of cars, one of which no reader has seen; wherever, whenever. */
function oddReports(random: SeededRandom, until: number, reads: number): LedgerReport[] {
  return Array.from({ length: Math.ceil(reads / 60) }, (): LedgerReport => {
    const fact = {
      identity: random.pick(REPORTED),
      at: Math.floor(random.between(STARTS_AT, until) / 1000) * 1000,
      siteId: random.pick([1, 3, 4]),
    };
    return random.chance(0.6)
      ? { ...fact, basis: 'report', event: random.pick([...reportEvents]), track: null }
      : {
          ...fact,
          basis: 'hand',
          event: random.chance(0.5) ? 'seen' : 'notThere',
          track: random.pick(['4', null]),
        };
  });
}

function gap(random: SeededRandom): number {
  const around = [0, 20_000, 60_000, 180_000, 30 * MINUTE_MS, HOUR_MS, 12 * HOUR_MS];
  return Math.max(0, random.pick(around) + random.whole(-3_000, 3_000));
}

function oddNetwork(random: SeededRandom) {
  const network = new NetworkBuilder();
  const kinds: Equipped[] = ['offsets', 'sensors', 'single'];
  const leads = [
    { name: 'North lead', equipped: true },
    { name: 'South lead', equipped: random.chance(0.5) },
  ];
  const yardA = network.site('QA', { leads });
  const line = network.site('QL', { kind: 'line' });
  const yardB = network.site('QB', { returnHours: 1 });
  const plant = network.site('QP', { kind: 'industry' });
  network.route(yardA, line, 40_000).route(line, yardB, 60_000).route(yardB, plant, 2_000);
  network.route(yardA, yardB, 104_000);
  const points: BuiltPoint[] = [
    network.readPoint(yardA, random.pick(kinds), {
      decreasingPlace: at(yardA),
      increasingNodes: [line, yardB],
    }),
    network.readPoint(line, random.pick(kinds), {
      decreasingNodes: [yardA],
      increasingNodes: [yardB],
    }),
    network.readPoint(yardB, random.pick(kinds), { increasingPlace: at(yardB), track: '1' }),
    network.readPoint(yardB, random.pick(kinds), { increasingPlace: at(yardB), track: '2' }),
    network.readPoint(yardB, random.pick(kinds), {
      decreasingPlace: at(yardB),
      increasingPlace: at(plant),
    }),
    network.readPoint(yardB, 'single', {
      decreasingPlace: at(yardB, '1'),
      increasingPlace: at(yardB, '2'),
    }),
    network.readPoint(plant, 'single', { kind: 'spot', increasingPlace: at(plant, 'dock') }),
  ];
  for (const number of [1, 2, 3]) network.register(`QTKX${number}`, 'car');
  const [, , first, second] = points as [BuiltPoint, BuiltPoint, BuiltPoint, BuiltPoint];
  const besides = new Map([
    [first, second],
    [second, first],
  ]);
  return { configuration: network.build(), points, besides };
}

/** Tags by unit: cars (three registered), an engine, an end-of-train device, a box, plain texts. */
function oddUnits(): string[][] {
  const pair = (groupCode: number, initial: string, number: number) =>
    (['left', 'right'] as const).map((side) => encodeAei({ groupCode, initial, number, side }));
  return [
    ...[1, 2, 3, 4, 5].map((number) => pair(19, 'QTKX', number)),
    pair(5, 'QLR', 70),
    pair(6, 'QLR', 9001).slice(0, 1),
    pair(10, 'ZQXU', 305438).slice(0, 1),
    ['QBLX 77', ...pair(19, 'QBLX', 77).slice(0, 1)],
  ];
}

function goBy(
  random: SeededRandom,
  point: BuiltPoint,
  tags: readonly string[],
  direction: number,
  time: number,
): LedgerRead[] {
  const metresPerSecond = random.pick([0.5, 2, 8, 20]);
  const stands = random.chance(0.08);
  const turns = random.chance(0.08);
  return tags.flatMap((tag, index) =>
    point.antennas.flatMap((antenna) => {
      if (random.chance(0.2)) return [];
      const passes = time + index * 700 + (direction * antenna.offsetM * 1000) / metresPerSecond;
      const instants = [passes];
      if (random.chance(0.5)) instants.push(passes + random.whole(1, 40));
      if (turns) instants.push(passes + random.whole(8_000, 40_000));
      if (stands) {
        for (let more = 1; more < random.whole(3, 50); more += 1) {
          instants.push(passes + more * random.whole(5_000, 59_000));
        }
      }
      return instants.map((instant) => ({
        siteId: point.siteId,
        antenna: antenna.number,
        tag,
        at: random.chance(0.3) ? Math.floor(instant / 1000) * 1000 : Math.floor(instant),
        holdCode: null,
      }));
    }),
  );
}

function onceEach(reads: readonly LedgerRead[]): LedgerRead[] {
  const once = new Map(
    reads.map((read) => [`${read.siteId} ${read.antenna} ${read.at} ${read.tag}`, read]),
  );
  return [...once.values()];
}

function onceEachRecord(records: readonly Ledger['wheels'][number][]) {
  const once = new Map(
    records.map((record) => [`${record.readPointId} ${record.startedAt}`, record]),
  );
  return [...once.values()];
}
