import { encodeAei } from '../../server/domain/identifiers/aei.js';
import type { BenchRead } from './ingest-traffic.js';

/** Cars of each site, and of one train. */
export const CARS_A_SITE = 400;
const CARS_A_TRAIN = 100;
const CARS_A_SECOND = 5;
const TRAIN_SECONDS = CARS_A_TRAIN / CARS_A_SECOND;
const SECONDS_A_CYCLE = 2 * TRAIN_SECONDS;
/** Shares no factor with the cycle, so that about half of any number of sites have a train. */
const SECONDS_BETWEEN_SITES = 17;
/** From the middle of the read point to either pair of antennas. */
const TO_ANTENNA_MS = 60;
const BETWEEN_READS_MS = 15;
const READS_A_CAR = 8;

/** A car gone by, and the last of its reads (ms). */
export interface GoneBy {
  unit: string;
  lastAt: number;
}

export interface Second {
  reads: BenchRead[];
  cars: GoneBy[];
}

/** Reads a second that `sites` sites come to in the long run: half of them have a train. */
export const paceOf = (sites: number) => (sites / 2) * CARS_A_SECOND * READS_A_CAR;

/**
 * What the reader of a site saw in the second from `from` (ms) on: trains of a hundred cars, out
 * and back in again after a pause, five cars a second. No train is that fast: so a hundred sites
 * make the pace of a thousand.
 */
export function secondOf(site: number, from: number): Second {
  const second = Math.floor(from / 1000) + site * SECONDS_BETWEEN_SITES;
  const inCycle = second % SECONDS_A_CYCLE;
  const seen: Second = { reads: [], cars: [] };
  if (inCycle >= TRAIN_SECONDS) return seen;
  const cycle = Math.floor(second / SECONDS_A_CYCLE);
  const direction = cycle % 2 ? 1 : -1;
  const train = Math.floor(cycle / 2) % (CARS_A_SITE / CARS_A_TRAIN);
  for (let place = 0; place < CARS_A_SECOND; place += 1) {
    const position = inCycle * CARS_A_SECOND + place;
    const inTrain = direction > 0 ? position : CARS_A_TRAIN - 1 - position;
    const number = 1 + site * CARS_A_SITE + train * CARS_A_TRAIN + inTrain;
    const middle = from + 100 + place * (900 / CARS_A_SECOND);
    seen.reads.push(...crossing(number, middle, direction));
    seen.cars.push({ unit: `QTKX${number}`, lastAt: middle + TO_ANTENNA_MS + BETWEEN_READS_MS });
  }
  return seen;
}

/** Two reads at each of four antennas: 1 and 2 come first in the increasing direction. */
function crossing(number: number, middle: number, direction: number): BenchRead[] {
  return [1, 2, 3, 4].flatMap((antenna) => {
    const tag = tagOf(number, antenna % 2 ? 'left' : 'right');
    const at = middle + direction * (antenna < 3 ? -TO_ANTENNA_MS : TO_ANTENNA_MS);
    return [0, BETWEEN_READS_MS].map((later) => {
      return {
        antenna,
        tag,
        readAt: new Date(at + later),
        rssi: -45 - antenna,
        count: 1 + antenna,
      };
    });
  });
}

const tags = new Map<string, string>();

function tagOf(number: number, side: 'left' | 'right'): string {
  const key = `${number} ${side}`;
  const known = tags.get(key);
  if (known) return known;
  const tag = encodeAei({ groupCode: 19, initial: 'QTKX', number, side, lengthDm: 170 });
  tags.set(key, tag);
  return tag;
}
