import { encodeAei } from '../../../domain/identifiers/aei.js';
import { between, randomOf } from '../../random.js';
import { branchCars } from '../../world/branch-cars.js';
import { carsOf, tagOf } from './consists.js';
import { instantOf, type Round } from './round.js';

/** A read that belongs to no pass. */
export interface LooseRead {
  site: string;
  antenna: number;
  tag: string;
  /** Milliseconds of the epoch, true time. */
  at: number;
  rssi: number;
  /** What the reader says instead of the time, where its clock is not merely off. */
  shownAt?: number;
  /** The car that did not go by, and at which read point. */
  stands?: { unit: string; readPoint: string; how: 'beam' | 'beside' };
}

const HOUR = 3_600_000;
const DAY = 24 * HOUR;
const STANDS = { fromHour: 80, hours: 3, everyMs: [24_000, 36_000] as [number, number] };
const BESIDE = { fromHour: 66, hours: 22, everyMs: [1_500_000, 3_300_000] as [number, number] };
const SOON_MS = 150_000;
/** Heard by Sorrel's new antenna, which nobody has entered yet. */
const UNKNOWN_ANTENNA = 9;
const TEST_TAG = encodeAei({ groupCode: 28, initial: 'QTST', number: 1, side: 'left' });

/** Every read of one round that belongs to no pass, unsorted. */
export function looseReads(round: Round): LooseRead[] {
  return [
    ...standing(round),
    ...beside(round),
    ...atUnknownAntenna(round),
    ...testTags(round),
    ...fromMemory(round),
  ];
}

/** A car of the second train stands in the beam of the second track. */
function standing(round: Round): LooseRead[] {
  const unit = branchCars.inTheBeam;
  const { value: tag } = tagOf(unit, 'left');
  const stands = { unit, readPoint: 'W2', how: 'beam' as const };
  return momentsOf(round, 'beam', STANDS).map((at) => {
    return { site: 'SORREL', antenna: 5, tag, at, rssi: -46, stands };
  });
}

/** Another stands beside the first track, where an antenna hears it again and again. */
function beside(round: Round): LooseRead[] {
  const unit = branchCars.beside;
  const { value: tag } = tagOf(unit, 'right');
  const stands = { unit, readPoint: 'W1', how: 'beside' as const };
  const moments = momentsOf(round, 'beside', BESIDE);
  const [first = round.start] = moments;
  // Until it is heard again nothing tells it from a car that went by.
  return [first, first + SOON_MS, ...moments.slice(1)].map((at) => {
    return { site: 'SORREL', antenna: 2, tag, at, rssi: -71.5, stands };
  });
}

function momentsOf(
  round: Round,
  name: string,
  { fromHour, hours, everyMs }: typeof STANDS,
): number[] {
  const random = randomOf(`${round.seed} ${name} ${round.number}`);
  const start = instantOf(round, fromHour, name);
  const moments: number[] = [];
  for (let at = start; at < start + hours * HOUR; at += between(random, ...everyMs)) {
    moments.push(Math.round(at));
  }
  return moments;
}

function atUnknownAntenna(round: Round): LooseRead[] {
  const start = instantOf(round, 70, 'first out of Sorrel');
  return carsOf.first.map((compact, index) => ({
    site: 'SORREL',
    antenna: UNKNOWN_ANTENNA,
    tag: tagOf(compact, 'right').value,
    at: start + 20_000 + index * 5_000,
    rssi: -55,
  }));
}

/** Somebody holds a test tag before the antennas of the quarry, and one that is worn out. */
function testTags(round: Round): LooseRead[] {
  const start = instantOf(round, 40, 'test tags');
  return [1, 2].flatMap((antenna) =>
    [TEST_TAG, 'TEST-PLATE'].map((tag, index) => {
      return {
        site: 'ROWAN',
        antenna,
        tag,
        at: start + antenna * 4_000 + index * 30_000,
        rssi: -40,
      };
    }),
  );
}

/** Every fourth round the quarry's reader sends what it kept in its memory for 500 days. */
function fromMemory(round: Round): LooseRead[] {
  if (round.number % 4 !== 2) return [];
  const at = instantOf(round, 41, 'memory');
  return carsOf.first.slice(5, 8).map((compact, index) => {
    const shownAt = at - 500 * DAY + index * 2_000;
    return { site: 'ROWAN', antenna: 1, tag: tagOf(compact, 'left').value, at, rssi: -52, shownAt };
  });
}
