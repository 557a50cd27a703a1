import { encodeAei } from '../../server/domain/identifiers/aei.js';
import type { Direction } from '../../server/domain/movements/configuration.js';
import type { Ledger } from '../../server/domain/movements/history-of.js';
import type { LedgerRead } from '../../server/domain/movements/resolve-read.js';
import type { BuiltPoint } from './network-builder.js';
import type { SeededRandom } from './seeded-random.js';
import type { Motion } from './train-motion.js';
import { type Crossover } from './train-motion.js';

export interface Vehicle {
  /** The compact identity that its tags name. */
  unit: string;
  kind: 'car' | 'locomotive' | 'endOfTrain';
  lengthM: number;
  /** The tag on its left and the one on its right; null: dead. */
  tags: { left: string | null; right: string | null };
}

/** A vehicle's place in a train: its middle, seen from the reference point, and which way round. */
interface Coupled {
  vehicle: Vehicle;
  middleM: number;
  turned: boolean;
}

/** A vehicle going over offset zero of a read point, in truth; `at` in ms. */
export interface TrueCrossing {
  unit: string;
  readPointId: number;
  at: number;
  direction: Direction;
  readable: boolean;
}

/** What was reported of one train, and what really happened. */
export interface Traffic extends Ledger {
  reads: LedgerRead[];
  wheels: Ledger['wheels'][number][];
  crossings: TrueCrossing[];
}

const GROUPS = { car: 19, locomotive: 5, endOfTrain: 6 };
const DEAD_SIDE = 0.04;
const TAG_FROM_END_M = 2.5;
const BEAM_M = 1.5;
const JITTER_MS = 15;
const RECORD_GAP_S = 30;

/** A vehicle with one tag a side, each dead once in 25. */
export function makeVehicle(
  random: SeededRandom,
  kind: Vehicle['kind'],
  initial: string,
  number: number,
): Vehicle {
  const tag = (side: 'left' | 'right') =>
    random.chance(DEAD_SIDE) ? null : encodeAei({ groupCode: GROUPS[kind], initial, number, side });
  const lengthM = kind === 'endOfTrain' ? 1 : random.between(13, 27);
  return {
    unit: `${initial}${number}`,
    kind,
    lengthM,
    tags: { left: tag('left'), right: tag('right') },
  };
}

export function lengthOf(train: readonly Vehicle[]): number {
  return train.reduce((sum, vehicle) => sum + vehicle.lengthM + 1, 0);
}

/**
 * Reports of a train that moves over a read point. Its reference point is the end of the first
 * vehicle; the others follow on the decreasing side. `startsAt` in ms is second 0 of the motion.
 */
export function reportTrain(
  random: SeededRandom,
  point: BuiltPoint,
  train: readonly Vehicle[],
  motion: Motion,
  startsAt: number,
): Traffic {
  const coupled = couple(random, train);
  const toMs = (seconds: number) => Math.floor(startsAt + seconds * 1000);
  const reads = coupled.flatMap((place) => readsOf(random, point, place, motion, toMs));
  const crossings = coupled.flatMap(({ vehicle, middleM }) =>
    motion.crossovers(-middleM).map(({ atS, direction }) => ({
      unit: vehicle.unit,
      readPointId: point.id,
      at: toMs(atS),
      direction,
      readable: isReadable(point, vehicle),
    })),
  );
  const wheels = point.kind === 'sensors' ? recordWheels(point, coupled, motion, toMs) : [];
  return { reads, wheels, crossings };
}

/** Several reports as one. */
export function together(parts: readonly Traffic[]): Traffic {
  return {
    reads: parts.flatMap((part) => part.reads),
    wheels: parts.flatMap((part) => part.wheels),
    crossings: parts.flatMap((part) => part.crossings),
  };
}

function couple(random: SeededRandom, train: readonly Vehicle[]): Coupled[] {
  let behindM = 0;
  return train.map((vehicle) => {
    const middleM = -(behindM + vehicle.lengthM / 2);
    behindM += vehicle.lengthM + 1;
    return { vehicle, middleM, turned: random.chance(0.5) };
  });
}

function isReadable(point: BuiltPoint, { tags }: Vehicle): boolean {
  return tags.left !== null || (tags.right !== null && point.kind !== 'single');
}

function readsOf(
  random: SeededRandom,
  { siteId, antennas }: BuiltPoint,
  { vehicle, middleM, turned }: Coupled,
  motion: Motion,
  toMs: (seconds: number) => number,
): LedgerRead[] {
  const fromMiddleM = Math.max(vehicle.lengthM / 2 - TAG_FROM_END_M, 0);
  return antennas.flatMap(({ side, offsetM, number }) => {
    const ownSide = turned === (side === 'left') ? 'right' : 'left';
    const tag = vehicle.tags[ownSide];
    if (tag === null) return [];
    const tagM = middleM + (side === 'left' ? fromMiddleM : -fromMiddleM);
    const middle = offsetM - tagM;
    return motion
      .spansWithin(middle - BEAM_M, middle + BEAM_M)
      .flatMap(({ fromS, toS }) => readTimes(random, fromS, toS))
      .map((second) => toMs(second + random.normal(JITTER_MS / 1000)))
      .map((at) => ({ siteId, antenna: number, tag, at, holdCode: null }));
  });
}

/** One to six reads, and one more every four seconds of standing in the beam. */
function readTimes(random: SeededRandom, fromS: number, toS: number): number[] {
  const count = random.whole(1, 6) + Math.min(Math.floor((toS - fromS) / 4), 400);
  const step = (toS - fromS) / count;
  return Array.from({ length: count }, (_, index) => fromS + (index + random.next()) * step);
}

function recordWheels(
  point: BuiltPoint,
  coupled: readonly Coupled[],
  motion: Motion,
  toMs: (seconds: number) => number,
): Traffic['wheels'] {
  const axles = coupled.flatMap(({ vehicle: { kind, lengthM }, middleM }) => {
    if (kind === 'endOfTrain') return [];
    const outer = lengthM / 2 - 1.5;
    return [outer, outer - 1.8, 1.8 - outer, -outer].map((fromMiddle) => middleM + fromMiddle);
  });
  const turns = axles
    .flatMap((axleM) => motion.crossovers(-axleM).map((turn) => ({ ...turn, axleM })))
    .sort((a, b) => a.atS - b.atS);
  const records: (Crossover & { axleM: number })[][] = [];
  for (const turn of turns) {
    const last = records.at(-1)?.at(-1);
    const goesOn = last?.direction === turn.direction && turn.atS - last.atS <= RECORD_GAP_S;
    if (goesOn) records.at(-1)?.push(turn);
    else records.push([turn]);
  }
  return records.map((record) => {
    const [first, last] = [record[0], record.at(-1)] as [
      Crossover & { axleM: number },
      (typeof turns)[0],
    ];
    const metres = Math.abs(last.axleM - first.axleM);
    const speedKmh = record.length > 1 ? (metres / (last.atS - first.atS)) * 3.6 : null;
    return {
      readPointId: point.id,
      startedAt: toMs(first.atS),
      endedAt: toMs(last.atS),
      direction: first.direction,
      speedKmh,
      axles: record.length,
    };
  });
}
