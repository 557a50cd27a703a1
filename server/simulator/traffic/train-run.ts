import { between, wholeBetween } from '../random.js';
import { directionFrom, inwardOf, leadOf, linePointOf, opposite } from './network.js';
import { railMetres, siteAt } from './network.js';
import { EPOCH, type Operations, type PassWish } from './operations.js';
import type { DemoUnit } from '../world/equipment.js';
import { OUTSIDE, type DemoReadPoint } from '../world/read-points.js';
import { board, boardStrangers, setOut } from './consist.js';
import type { Vehicle } from './pass.js';
import type { Turn } from './plan.js';
import { leaveOnSiding, takeFromSiding } from './siding.js';
import { HOUR, type Riding } from './stock.js';

const DAY = 24 * HOUR;
const MINUTE = 60_000;

/** Locomotives and an end-of-train device that stay together. */
interface Set {
  power: DemoUnit[];
  rear: DemoUnit;
  isAway: boolean;
}

/** One train on its way. */
export interface Train {
  turn: Turn;
  set: Set;
  path: string[];
  stops: string[];
  /** Index in the path of the node it stands at or left last. */
  index: number;
  isBack: boolean;
  number: number;
  cars: Riding[];
}

/** Notes every departure of a turn, week after week. */
export function noteTurn(operations: Operations, turn: Turn): void {
  const isForeign = turn.carries === 'strangers';
  const sets = Array.from({ length: turn.sets }, () => {
    const power = operations.assign(isForeign ? 'strangerPower' : 'power', isForeign ? 3 : 2);
    const [rear] = operations.assign(isForeign ? 'strangerRear' : 'rear', 1);
    if (!rear) throw new Error('A train needs an end-of-train device.');
    return { power, rear, isAway: false };
  });
  let departures = 0;
  for (const day of turn.days) {
    const weekly = (at: number) => {
      operations.agenda.note(at + 7 * DAY, weekly);
      const set = sets[departures % sets.length];
      departures += 1;
      if (set) leaveHome(operations, turn, set, operations.later(at, 0, 1.4));
    };
    operations.agenda.note(EPOCH + day * DAY + turn.hour * HOUR, weekly);
  }
}

function leaveHome(operations: Operations, turn: Turn, set: Set, at: number): void {
  operations.agenda.note(at, (now) => {
    if (set.isAway) return leaveHome(operations, turn, set, now + 2 * HOUR);
    set.isAway = true;
    const number = wholeBetween(operations.random, 100, 999);
    const { path, stops } = turn;
    const train = { turn, set, path, stops, index: 0, isBack: false, number, cars: [] };
    leave(operations, train, now);
  });
}

function leave(operations: Operations, train: Train, at: number): void {
  const [here, next] = [nodeAt(train, 0), nodeAt(train, 1)];
  if (train.turn.carries === 'strangers') {
    if (train.index === 0) train.cars = boardStrangers(operations, train.turn.capacity);
  } else {
    board(operations, train, here, at);
  }
  if (here === OUTSIDE) return goOn(operations, train, at);
  passOut(operations, train, leadOf(here, next), at + 10 * MINUTE, wholeTrain(train));
}

function passOut(
  operations: Operations,
  train: Train,
  lead: DemoReadPoint,
  at: number,
  vehicles: Vehicle[],
): void {
  const wish = wishOf(operations, train, lead, vehicles, [9, 28]);
  const direction = opposite(inwardOf(lead));
  operations.pass(at, { ...wish, direction, purpose: 'depart' }, (end) => {
    leaveOnSiding(operations, train, end);
    takeFromSiding(operations, train, end);
    goOn(operations, train, end);
  });
}

function goOn(operations: Operations, train: Train, at: number): void {
  const metres = railMetres(nodeAt(train, 0), nodeAt(train, 1));
  const metresAnHour = between(operations.random, 36_000, 55_000);
  const arrival = Math.round(at + (metres / metresAnHour) * HOUR);
  operations.agenda.note(arrival, (now) => {
    train.index += 1;
    reach(operations, train, now);
  });
}

function reach(operations: Operations, train: Train, at: number): void {
  const [from, here] = [nodeAt(train, -1), nodeAt(train, 0)];
  const site = siteAt(here);
  if (train.index === train.path.length - 1) return finish(operations, train, at);
  if (!site) return goOn(operations, train, at);
  if (site.kind === 'line') {
    const point = linePointOf(here);
    const wish = wishOf(operations, train, point, wholeTrain(train), [30, 78]);
    const direction = directionFrom(point, from);
    return operations.pass(at, { ...wish, direction, purpose: 'line' }, (end) =>
      goOn(operations, train, end),
    );
  }
  const [entry, exit] = [leadOf(here, from), leadOf(here, nodeAt(train, 1))];
  if (entry !== exit) return runThrough(operations, train, entry, exit, at);
  if (train.stops.includes(here)) return workFromTheLine(operations, train, entry, at);
  goOn(operations, train, at);
}

/** In by one lead, out by another; sets out and picks up where it has a stop. */
function runThrough(
  operations: Operations,
  train: Train,
  entry: DemoReadPoint,
  exit: DemoReadPoint,
  at: number,
): void {
  passIn(operations, train, entry, at, wholeTrain(train), (end) => {
    if (train.stops.includes(entry.site)) setOut(operations, train, entry.site, end);
    operations.agenda.note(operations.later(end, 0.4, 1.3), (now) => {
      if (train.stops.includes(entry.site)) board(operations, train, entry.site, now);
      passOut(operations, train, exit, now, wholeTrain(train));
    });
  });
}

/** The train waits on the main track while its engines take a cut in and bring another out. */
function workFromTheLine(
  operations: Operations,
  train: Train,
  lead: DemoReadPoint,
  at: number,
): void {
  const cut = train.cars.filter((car) => car.getOff === lead.site);
  const inward = [...powerOf(train), ...vehiclesOf(cut)];
  passIn(operations, train, lead, at + 12 * MINUTE, inward, (end) => {
    const staying = train.cars.filter((car) => car.getOff !== lead.site);
    setOut(operations, train, lead.site, end);
    operations.agenda.note(operations.later(end, 0.4, 1.2), (now) => {
      board(operations, train, lead.site, now);
      const fresh = train.cars.filter((car) => !staying.includes(car));
      passOut(operations, train, lead, now, [...powerOf(train), ...vehiclesOf(fresh)]);
    });
  });
}

function finish(operations: Operations, train: Train, at: number): void {
  const [from, here] = [nodeAt(train, -1), nodeAt(train, 0)];
  if (here === OUTSIDE) return turnBack(operations, train, at);
  passIn(operations, train, leadOf(here, from), at, wholeTrain(train), (end) => {
    setOut(operations, train, here, end);
    turnBack(operations, train, end);
  });
}

function turnBack(operations: Operations, train: Train, at: number): void {
  if (train.isBack) {
    train.set.isAway = false;
    return;
  }
  train.isBack = true;
  train.path = [...train.path].reverse();
  train.stops = [...train.stops].reverse();
  train.index = 0;
  train.cars = [];
  train.number += 1;
  const hours = train.turn.layoverHours;
  operations.agenda.note(operations.later(at, hours, hours + 1.5), (now) =>
    leave(operations, train, now),
  );
}

function passIn(
  operations: Operations,
  train: Train,
  lead: DemoReadPoint,
  at: number,
  vehicles: Vehicle[],
  then: (end: number) => void,
): void {
  const wish = wishOf(operations, train, lead, vehicles, [7, 24]);
  operations.pass(at, { ...wish, direction: inwardOf(lead), purpose: 'arrive' }, then);
}

function wishOf(
  { random }: Operations,
  train: Train,
  point: DemoReadPoint,
  vehicles: Vehicle[],
  [low, high]: [number, number],
): Omit<PassWish, 'direction' | 'purpose'> {
  const speedKmh = between(random, low, high);
  const stops = low < 30 && vehicles.length > 8 && random() < 0.05;
  const halt = stops
    ? {
        atM: between(random, 40, 14 * vehicles.length),
        seconds: between(random, 90, 600),
        backM: random() < 0.5 ? between(random, 8, 45) : 0,
      }
    : null;
  return {
    point,
    vehicles,
    speedKmh,
    halt,
    trainNumber: train.number % 4 === 0 ? train.number : null,
  };
}

function nodeAt(train: Train, offset: number): string {
  const node = train.path[train.index + offset];
  if (node === undefined) throw new Error(`Train ${train.number} has left its path.`);
  return node;
}

function powerOf({ set }: Train): Vehicle[] {
  return set.power.map((unit, index) => ({ unit, bLeads: index % 2 === 1, loads: [] }));
}

function vehiclesOf(cars: Riding[]): Vehicle[] {
  return cars.map(({ unit, bLeads, loads }) => ({ unit, bLeads, loads }));
}

function wholeTrain(train: Train): Vehicle[] {
  const rear = { unit: train.set.rear, bLeads: false, loads: [] };
  return [...powerOf(train), ...vehiclesOf(train.cars), rear];
}
