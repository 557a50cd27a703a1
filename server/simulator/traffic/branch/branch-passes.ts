import { between, randomOf } from '../../random.js';
import type { DemoReadPoint } from '../../world/read-points.js';
import { motionOf, type Halt } from '../motion.js';
import { inwardOf, opposite } from '../network.js';
import { lengthOf, turnedRound, type Direction, type Pass, type Purpose } from '../pass.js';
import type { Vehicle } from '../pass.js';
import { carsOf, lightEngine, storedCut, trainOf } from './consists.js';
import { instantOf, pointNamed, type Round } from './round.js';

const MINUTE = 60_000;
/** On every fourth round the clock at Pipit runs ahead while the switcher works. */
export const CLOCK_AHEAD = { site: 'PIPIT', everyRounds: 4, round: 1, fromHour: 30, toHour: 31 };

const quarry = pointNamed('ROWAN', 'L');
const [west1, west2] = [pointNamed('SORREL', 'W1'), pointNamed('SORREL', 'W2')];
const line = pointNamed('LINNET', 'M');
const storage = pointNamed('PIPIT', 'L');

/** Every pass of one round at the read points of the branch, in order of time. */
export function branchPasses(round: Round): Pass[] {
  const passes = [...firstTrain(round), ...secondTrain(round), ...switcher(round)];
  return passes.sort((a, b) => a.at - b.at);
}

/**
 * Pipit to Sorrel, where it meets the second train; out by the lead that is not equipped to Rowan,
 * over whose reader it stops and where its engine runs round; and back.
 */
function firstTrain(round: Round): Pass[] {
  const train = (at: number) => trainOf(round, 'first', at);
  const back = (at: number) => trainOf(round, 'first', at, true);
  const engine = () => lightEngine('first');
  const halt = { atM: 76, seconds: 140, backM: 0 };
  return [
    pass(round, 'first out of Pipit', 2, { ...outOf(storage), vehicles: train }),
    pass(round, 'first by Linnet', 3, { ...by('decreasing'), vehicles: train }),
    pass(round, 'meet', 4, { ...into(west1), vehicles: train, faintAt: west2 }),
    pass(round, 'first into Rowan', 27, { ...into(quarry), vehicles: train, halt }),
    pass(round, 'runs round', 27.5, { ...outOf(quarry, 'sortOut'), vehicles: engine }),
    pass(round, 'has run round', 27.8, { ...into(quarry, 'sortBack'), vehicles: engine }),
    pass(round, 'first out of Rowan', 50, { ...outOf(quarry), vehicles: back }),
    pass(round, 'first out of Sorrel', 70, { ...outOf(west1), vehicles: back }),
    pass(round, 'first back by Linnet', 71, { ...by('increasing'), vehicles: back }),
    pass(round, 'first into Pipit', 72, { ...into(storage), vehicles: back }),
  ];
}

/** Sorrel to the kiln at Bryony, which no reader sees, and back. */
function secondTrain(round: Round): Pass[] {
  const train = (at: number) => trainOf(round, 'second', at);
  const back = (at: number) => trainOf(round, 'second', at, true);
  const meet = { ...outOf(west2), vehicles: train, faintAt: west1, delayMs: 25_000 };
  return [
    pass(round, 'meet', 4, meet),
    pass(round, 'second by Linnet', 5, { ...by('increasing'), vehicles: train }),
    pass(round, 'second back by Linnet', 60.9, { ...by('decreasing'), vehicles: back }),
    pass(round, 'second into Sorrel', 62, { ...into(west2), vehicles: back }),
  ];
}

/**
 * The cut at Pipit goes out over the lead and back, minutes after the second train has come to
 * Sorrel with the car whose tag one of the cut wears; now and then another time too.
 */
function switcher(round: Round): Pass[] {
  const all = (at: number) => storedCut(round, carsOf.stored, at);
  const some = (at: number) => storedCut(round, [carsOf.stored[0] ?? ''], at);
  const returned = (cut: typeof all) => (at: number) => turnedRound(cut(at));
  const [out, back] = [outOf(storage, 'sortOut'), into(storage, 'sortBack')];
  const name = 'second into Sorrel';
  const passes = [
    pass(round, name, 62, { ...out, vehicles: all, delayMs: 6 * MINUTE }),
    pass(round, name, 62, { ...back, vehicles: returned(all), delayMs: 15 * MINUTE }),
  ];
  if (round.number % CLOCK_AHEAD.everyRounds !== CLOCK_AHEAD.round) return passes;
  return [
    ...passes,
    pass(round, 'clock ahead', 30.1, { ...out, vehicles: some }),
    pass(round, 'clock still ahead', 30.6, { ...back, vehicles: returned(some) }),
  ];
}

interface Wish {
  point: DemoReadPoint;
  direction: Direction;
  purpose: Purpose;
  speed: [number, number];
  vehicles: (at: number) => Vehicle[];
  halt?: Halt;
  faintAt?: DemoReadPoint;
  delayMs?: number;
}

type Way = Pick<Wish, 'point' | 'direction' | 'purpose' | 'speed'>;

function into(point: DemoReadPoint, purpose: Purpose = 'arrive'): Way {
  return { point, direction: inwardOf(point), purpose, speed: [9, 15] };
}

function outOf(point: DemoReadPoint, purpose: Purpose = 'depart'): Way {
  return { point, direction: opposite(inwardOf(point)), purpose, speed: [9, 15] };
}

function by(direction: Direction): Way {
  return { point: line, direction, purpose: 'line', speed: [32, 55] };
}

function pass(round: Round, name: string, hour: number, wish: Wish): Pass {
  const { point, direction, purpose, speed, halt = null, faintAt, delayMs = 0 } = wish;
  const at = instantOf(round, hour, name) + delayMs;
  const vehicles = wish.vehicles(at);
  const random = randomOf(`${round.seed} motion ${point.site} ${point.code} ${at}`);
  const motion = motionOf(random, lengthOf(vehicles), between(random, ...speed), halt);
  const own = { point, direction, purpose, vehicles, motion, at, trainNumber: null };
  return faintAt ? { ...own, faintAt } : own;
}
