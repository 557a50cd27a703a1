import type { ReportEvent } from '../../contract/movement-reports.js';
import { siteOfPlace, type Direction, type Network, type Place } from './configuration.js';
import type { PassageRole, PassKey } from './passes.js';

/** A unit at a read point, as its pass left it; instants in ms. */
export interface Sighting {
  readPointId: number;
  firstAt: number;
  lastAt: number;
  role: PassageRole;
  direction: Direction | null;
  pass: PassKey;
  /** Different tags that were read of it. */
  tagCount: number;
}

/** A report of somebody's own, or what a person saw by eye; `firstAt` and `lastAt` are its time, ms. */
export interface Report {
  event: ReportEvent | 'seen' | 'notThere';
  basis: 'report' | 'hand';
  siteId: number;
  track: string | null;
  firstAt: number;
  lastAt: number;
}

/** What a unit's history is made of. */
export type Fact = Sighting | Report;

export function isReport(fact: Fact): fact is Report {
  return 'event' in fact;
}

/** From where to where a sighting moved a unit, as far as it did. */
export interface Move {
  kind: 'crossing' | 'presence' | 'spot';
  from: Place;
  to: Place;
}

const LONG_PASSAGE_MS = 2 * 60_000;

export type Moved = Pick<Sighting, 'readPointId' | 'firstAt' | 'lastAt' | 'role' | 'direction'>;

export function moveOf(network: Network, { readPointId, role, direction }: Moved): Move {
  const point = network.readPoint(readPointId);
  const decreasing = standing(network, point.decreasingPlace);
  const increasing = standing(network, point.increasingPlace);
  if (point.kind === 'spot') {
    const place = increasing ?? decreasing;
    const track = role === 'crossing' ? null : (place?.track ?? point.track);
    const at = place && { siteId: place.siteId, track };
    return { kind: role === 'crossing' ? 'presence' : 'spot', from: at, to: at };
  }
  const kind = role === 'crossing' ? 'crossing' : 'presence';
  return direction === 'decreasing'
    ? { kind, from: increasing, to: decreasing }
    : { kind, from: decreasing, to: increasing };
}

/** A place where units stand: at a line point they only go by. */
function standing(network: Network, place: Place): Place {
  return place && network.site(place.siteId).kind !== 'line' ? place : null;
}

/** A crossing's instant is its first read; that of a long passage out to the line, its last. */
export function instantOf({ firstAt, lastAt }: Moved, { kind, from, to }: Move): number {
  const leaves = kind === 'crossing' && from !== null && to === null;
  return leaves && lastAt - firstAt > LONG_PASSAGE_MS ? lastAt : firstAt;
}

/** When a sighting was seen leaving a site, ms; null when it was not. */
export function departureFrom(network: Network, moved: Moved, siteId: number): number | null {
  const move = moveOf(network, moved);
  const leaves = move.kind === 'crossing' && siteOfPlace(move.from) === siteId;
  return leaves && siteOfPlace(move.to) !== siteId ? instantOf(moved, move) : null;
}
