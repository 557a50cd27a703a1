import type { Configuration } from '../../server/domain/movements/configuration.js';
import { at, NetworkBuilder, type BuiltPoint, type Equipped } from './network-builder.js';
import { SeededRandom } from './seeded-random.js';
import {
  lengthOf,
  makeVehicle,
  reportTrain,
  together,
  type Traffic,
  type Vehicle,
} from './train-generator.js';
import { Motion } from './train-motion.js';

/** Two yards with one equipped lead each, a line between them and a plant behind the second. */
export interface TwoYards {
  configuration: Configuration;
  yardA: number;
  yardB: number;
  plant: number;
  leadA: BuiltPoint;
  leadB: BuiltPoint;
  line: BuiltPoint;
  gate: BuiltPoint;
}

const MINUTE_S = 60;
const HOUR_MS = 3_600_000;
const CLEAR_M = 40;
/** Long enough for a train to be in before anything else moves over that lead. */
const CYCLE_HOURS = 6;
const STOPS = 0.1;

/** 40 km from yard A to the line point, 60 km on to yard B, 2 km to the plant. */
export function twoYards(equipped: Equipped): TwoYards {
  const network = new NetworkBuilder();
  const yardA = network.site('QA');
  const lineSite = network.site('QL', { kind: 'line' });
  const yardB = network.site('QB');
  const plant = network.site('QP', { kind: 'industry' });
  network.route(yardA, lineSite, 40_000).route(lineSite, yardB, 60_000).route(yardB, plant, 2_000);
  const leadA = network.readPoint(yardA, equipped, {
    decreasingPlace: at(yardA),
    increasingNodes: [lineSite],
  });
  const line = network.readPoint(lineSite, equipped, {
    decreasingNodes: [yardA],
    increasingNodes: [yardB],
  });
  const leadB = network.readPoint(yardB, equipped, {
    increasingPlace: at(yardB),
    decreasingNodes: [lineSite],
  });
  const gate = network.readPoint(yardB, equipped, {
    decreasingPlace: at(yardB),
    increasingPlace: at(plant),
  });
  return { configuration: network.build(), yardA, yardB, plant, leadA, leadB, line, gate };
}

interface Yard {
  point: BuiltPoint;
  /** The direction in which its lead is left. */
  out: 'increasing' | 'decreasing';
  cars: Vehicle[];
  engines: Vehicle[];
}

/** Trains between the yards, and switching over their leads, for `hours`; all from one seed. */
export function generateTraffic(
  world: TwoYards,
  seed: number,
  { hours, startsAt, cars }: { hours: number; startsAt: number; cars: number },
): Traffic {
  const random = new SeededRandom(seed);
  const make = (count: number, first: number) =>
    Array.from({ length: count }, (_, index) => makeVehicle(random, 'car', 'QTKX', first + index));
  const engine = (number: number) => makeVehicle(random, 'locomotive', 'QLR', number);
  const a: Yard = { point: world.leadA, out: 'increasing', cars: make(cars, 1000), engines: [] };
  const b: Yard = { point: world.leadB, out: 'decreasing', cars: make(cars, 5000), engines: [] };
  a.engines.push(engine(1), engine(2));
  b.engines.push(engine(3), engine(4));
  const parts: Traffic[] = [];
  for (let hour = 0; hour < hours; hour += CYCLE_HOURS) {
    const time = startsAt + hour * HOUR_MS;
    const [from, to] = (hour / CYCLE_HOURS) % 2 ? [b, a] : [a, b];
    parts.push(...switching(random, random.chance(0.5) ? from : to, time));
    parts.push(...haul(random, world, from, to, time + 90 * 60_000));
  }
  return together(parts);
}

/** An engine draws a cut out over the lead, and pushes it back in. */
function switching(random: SeededRandom, yard: Yard, time: number): Traffic[] {
  const cut = take(random, yard.cars, random.whole(3, 12));
  const engines = yard.engines.slice(0, 1);
  // The engine leads out, so it stands at the outer end of the cut.
  const train = yard.out === 'increasing' ? [...engines, ...cut] : [...cut, ...engines];
  const lengthM = lengthOf(train);
  const [inside, outside] = ends(yard, lengthM);
  const whole = random.chance(0.6);
  const turnsAt = whole ? outside : inside + (outside - inside) * random.between(0.2, 0.8);
  const speed = random.between(1.5, 5);
  const motion = new Motion(inside)
    .run(turnsAt, speed, 0)
    .wait(random.between(20, 12 * MINUTE_S))
    .run(inside, 0, speed);
  yard.cars.push(...cut);
  return [reportTrain(random, yard.point, train, motion, time)];
}

/** A train leaves one yard, passes the line point and enters the other. */
function haul(
  random: SeededRandom,
  world: TwoYards,
  from: Yard,
  to: Yard,
  time: number,
): Traffic[] {
  const cars = take(random, from.cars, random.whole(8, 30));
  const engine = from.engines.shift();
  if (!engine) return [];
  const device = makeVehicle(random, 'endOfTrain', 'QEOT', random.whole(1, 999_999));
  const order = [engine, ...cars, device];
  const train = from.out === 'increasing' ? order : order.reverse();
  to.cars.push(...cars);
  to.engines.push(engine);
  const forward = from.out === 'increasing';
  const hours = [0, 1.4, 3.2];
  return [from.point, world.line, to.point].map((point, index) => {
    const motion = through(random, lengthOf(train), forward, index === 1);
    return reportTrain(random, point, train, motion, time + (hours[index] as number) * HOUR_MS);
  });
}

/** Over a read point once, at 5 to 80 km/h, now and then with a stop, or a stop and some metres back. */
function through(random: SeededRandom, lengthM: number, forward: boolean, onLine: boolean): Motion {
  const [low, high] = [-CLEAR_M, lengthM + CLEAR_M];
  const [start, end] = forward ? [low, high] : [high, low];
  const kmh = () => (onLine ? random.between(30, 80) : random.between(5, 40)) / 3.6;
  const motion = new Motion(start);
  const middle = start + (end - start) * random.between(0.1, 0.9);
  if (random.chance(STOPS)) {
    motion.run(middle, kmh(), 0).wait(random.between(20, 15 * MINUTE_S));
    if (random.chance(0.3)) {
      const back = middle - (end - start) * random.between(0.05, 0.1);
      motion.run(back, 0, 1.5).wait(random.between(20, 3 * MINUTE_S));
    }
    return motion.run(end, 0, kmh());
  }
  return motion.run(middle, kmh(), kmh()).run(end, kmh(), kmh());
}

/** Where the train's reference point is when all of it is inside the yard, and all outside. */
function ends(yard: Yard, lengthM: number): [number, number] {
  const [low, high] = [-CLEAR_M, lengthM + CLEAR_M];
  return yard.out === 'increasing' ? [low, high] : [high, low];
}

function take(random: SeededRandom, cars: Vehicle[], count: number): Vehicle[] {
  const start = random.whole(0, Math.max(cars.length - count, 0));
  return cars.splice(start, count);
}
