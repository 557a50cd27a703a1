import { theilSenSlope } from '../statistics/theil-sen.js';
import type { AntennaConfiguration, Direction } from './configuration.js';
import { groupsOf, type Evidence, type UsableRead } from './evidence.js';

/** An axle counter's record of one train or cut; `direction` null when it could not tell. */
export interface WheelRecord {
  startedAt: number;
  endedAt: number;
  direction: Direction | null;
  speedKmh: number | null;
  axles: number;
}

/** What one passage says of its own movement. */
export interface OwnMovement {
  direction: Direction | null;
  basis: 'sensors' | 'antennas' | null;
  /** It came, and went back the way it came: no crossing. */
  returned: boolean;
  /** A wheel record covers its first or last read. */
  sensed: boolean;
  /** From the wheel record, else from the slope over the antennas; null when neither tells. */
  speedKmh: number | null;
}

/** Looks up the antenna of a number at the read point's site. */
export type AntennaOf = (number: number) => AntennaConfiguration | undefined;

/** A wheel record also covers what was read this long before or after it. */
export const WHEEL_REACH_MS = 10_000;
const AWAY_MS = 10_000;
const FASTEST_KMH = 300;

/** Own direction, return and speed of a passage (its visits in order). */
export function ownMovement(
  visits: readonly Evidence[],
  span: { firstAt: number; lastAt: number },
  antennaOf: AntennaOf,
  wheels: readonly WheelRecord[],
  { isEndOfTrain, severalOffsets }: { isEndOfTrain: boolean; severalOffsets: boolean },
): OwnMovement {
  const first = covering(wheels, span.firstAt);
  const last = covering(wheels, span.lastAt);
  const sensed = Boolean(first ?? last);
  const slope = slowness(visits, antennaOf);
  const measured = first?.speedKmh ?? last?.speedKmh ?? null;
  const speedKmh = rounded(measured ?? (slope ? 3600 / Math.abs(slope) : null));
  const bySensors = first?.direction ?? last?.direction ?? null;
  if (bySensors) {
    const returned = Boolean(last?.direction) && last?.direction !== first?.direction;
    return first?.direction && returned
      ? { direction: null, basis: null, returned: true, sensed, speedKmh }
      : { direction: bySensors, basis: 'sensors', returned: false, sensed, speedKmh };
  }
  const byTags = !sensed && !isEndOfTrain;
  if (severalOffsets ? wentBackAlong(visits, antennaOf) : byTags && wentBackByTags(visits)) {
    return { direction: null, basis: null, returned: true, sensed, speedKmh: null };
  }
  if (!slope) return { direction: null, basis: null, returned: false, sensed, speedKmh };
  const direction = slope > 0 ? 'increasing' : 'decreasing';
  return { direction, basis: 'antennas', returned: false, sensed, speedKmh };
}

/** Two places; jitter over a short distance must not make a train faster than any is. */
function rounded(speedKmh: number | null): number | null {
  return speedKmh === null ? null : Math.min(Math.round(speedKmh * 100) / 100, FASTEST_KMH);
}

/** The record that covers `at` within ten seconds; the nearest, of those the earliest. */
function covering(wheels: readonly WheelRecord[], at: number): WheelRecord | undefined {
  let best: WheelRecord | undefined;
  let least = WHEEL_REACH_MS + 1;
  for (const record of wheels) {
    const distance = Math.max(record.startedAt - at, at - record.endedAt, 0);
    if (distance < least) [best, least] = [record, distance];
  }
  return best;
}

/**
 * Milliseconds per metre in the increasing direction: Theil-Sen over one point per antenna (the
 * middle of its reads), only between antennas of one side that read the same raw tag. The two tags
 * of a car sit metres apart along it, so mixing sides gives the wrong sign. Null or 0: no telling.
 */
function slowness(visits: readonly Evidence[], antennaOf: AntennaOf): number | null {
  const points = new Map<string, { x: number; y: number }[]>();
  for (const group of visits.flatMap(groupsOf)) {
    const antenna = antennaOf(group.antenna);
    if (!antenna) continue;
    const point = { x: antenna.offsetM, y: (group.firstAt + group.lastAt) / 2 };
    const key = `${antenna.side} ${group.tag}`;
    points.set(key, [...(points.get(key) ?? []), point]);
  }
  return theilSenSlope(...points.values());
}

/**
 * Judged on one raw tag at antennas of one side: back at the first offset after another one, at
 * least ten seconds away from it.
 */
function wentBackAlong(visits: readonly Evidence[], antennaOf: AntennaOf): boolean {
  const sequences = new Map<string, { place: number; at: number }[]>();
  for (const read of visits.flatMap((visit) => visit.reads ?? [])) {
    const antenna = antennaOf(read.antenna);
    if (!antenna) continue;
    const key = `${antenna.side} ${read.tag}`;
    sequences.set(key, [...(sequences.get(key) ?? []), { place: antenna.offsetM, at: read.at }]);
  }
  return [...sequences.values()].some(isBackAtStart);
}

/** With one offset and no sensors: back at the first tag after the other tag. */
function wentBackByTags(visits: readonly Evidence[]): boolean {
  const reads = visits.flatMap((visit) => visit.reads ?? []);
  return isBackAtStart(reads.map((read) => ({ place: read.tag, at: read.at })));
}

/** Starts and ends at one place, was at another in between, for ten seconds or more. */
function isBackAtStart(sequence: readonly { place: UsableRead['tag'] | number; at: number }[]) {
  const start = sequence[0]?.place;
  if (start === undefined || sequence.at(-1)?.place !== start) return false;
  let leftAt: number | null = null;
  return sequence.some(({ place, at }, index) => {
    if (place !== start) {
      leftAt ??= sequence[index - 1]?.at ?? at;
      return false;
    }
    const away = leftAt === null ? 0 : at - leftAt;
    leftAt = null;
    return away >= AWAY_MS;
  });
}
