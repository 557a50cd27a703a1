import { between, wholeBetween, type Random } from '../random.js';
import type { DemoUnit } from '../world/equipment.js';
import { shop } from './flows.js';
import { spotOf } from './network.js';
import type { Operations } from './operations.js';
import type { Load } from './pass.js';
import type { Riding, Standing } from './stock.js';
import type { Train } from './train-run.js';

/** Boxes that one well car takes. */
const BOXES_A_CAR = 2;

/** Lets every car that is ready and bound this way into the train, nearest stop first. */
export function board(operations: Operations, train: Train, site: string, at: number): void {
  const { random, stock } = operations;
  const ahead = stopsAhead(train);
  const isWell = train.turn.carries === 'boxes';
  const isReady = ({ unit, readyAt, getOff }: Standing) =>
    readyAt <= at &&
    ahead.includes(getOff) &&
    unit.flow !== 'box' &&
    isWell === (unit.flow === 'well');
  const taken = stock.take(site, train.turn.capacity - train.cars.length, isReady);
  const fresh = taken.map(({ unit, destination, getOff }): Riding => {
    const loads = isWell ? loadBoxes(operations, site, getOff, at) : [];
    return { unit, destination, getOff, bLeads: random() < 0.5, loads };
  });
  train.cars = [...fresh, ...train.cars].sort(
    (a, b) => ahead.indexOf(a.getOff) - ahead.indexOf(b.getOff),
  );
}

/** Sets out every car (and its boxes) that has come to where it leaves this train. */
export function setOut(operations: Operations, train: Train, site: string, at: number): void {
  for (const car of train.cars.filter(({ getOff }) => getOff === site)) {
    operations.stock.place(car.unit, site, at, car.destination);
    if (site === shop) takeIntoShop(operations, car, at);
    for (const { unit } of car.loads) operations.stock.place(unit, site, at, site);
  }
  train.cars = train.cars.filter(({ getOff }) => getOff !== site);
}

/** Some hours later the car is set before the door of the shop. */
function takeIntoShop(operations: Operations, { unit, bLeads }: Riding, at: number): void {
  const point = spotOf(shop);
  const vehicles = [{ unit, bLeads, loads: [] }];
  const halt = { atM: unit.lengthDm / 20, seconds: 90, backM: 0 };
  const wish = { point, vehicles, speedKmh: 5, halt, direction: 'increasing' as const };
  operations.pass(operations.later(at, 2, 18), { ...wish, purpose: 'spot' }, () => undefined);
}

/** Stops that the train still has before it. */
export function stopsAhead({ path, stops, index }: Train): string[] {
  return path.slice(index + 1).filter((node) => stops.includes(node));
}

function loadBoxes({ random, stock }: Operations, site: string, getOff: string, at: number) {
  const most = random() < 0.08 ? 0 : BOXES_A_CAR;
  const isReady = (standing: Standing) =>
    standing.unit.flow === 'box' && standing.readyAt <= at && standing.getOff === getOff;
  return stock.take(site, most, isReady).map(({ unit }) => loadOf(random, unit));
}

function loadOf(random: Random, unit: DemoUnit): Load {
  return { unit, behindM: between(random, 6, 17), hand: random() < 0.5 ? 'left' : 'right' };
}

/** A train of strangers: cars and loaded well cars that were away longest. */
export function boardStrangers({ random, stock }: Operations, capacity: number): Riding[] {
  const { cars, wells, boxes } = stock.strangers;
  const wellCount = wholeBetween(random, 8, 18);
  const carCount = wholeBetween(random, capacity - wellCount - 8, capacity - wellCount);
  const taken = [
    ...takeFirst(cars, carCount).map((unit) => ({ unit, loads: [] })),
    ...takeFirst(wells, wellCount).map((unit) => {
      const count = wholeBetween(random, 0, BOXES_A_CAR);
      return { unit, loads: takeFirst(boxes, count).map((box) => loadOf(random, box)) };
    }),
  ];
  return taken.map(({ unit, loads }) => {
    return { unit, loads, destination: '', getOff: '', bLeads: random() < 0.5 };
  });
}

/** The first `count`, put back at the end of the list: the longest away come next. */
function takeFirst(list: DemoUnit[], count: number): DemoUnit[] {
  const taken = list.splice(0, count);
  list.push(...taken);
  return taken;
}
