import type { Direction, Network, ReadPointConfiguration } from './configuration.js';
import type { Evidence } from './evidence.js';
import { STANDING_MS, type DirectionBasis, type PassageRole } from './passes.js';
import { sideOfPoint } from './side-of-point.js';
import { onlyGroup } from './strays.js';

/** A unit's sighting next before or after its passage in the pass that is voted on. */
export interface Adjacent {
  readPointId: number;
  /** First and last read, ms. */
  firstAt: number;
  lastAt: number;
  direction: Direction | null;
  basis: DirectionBasis | null;
}

/** A unit of a pass whose own reads tell no direction. */
export interface Voter {
  firstAt: number;
  lastAt: number;
  before: Adjacent | null;
  after: Adjacent | null;
}

/** What of a passage decides whether it has a vote. */
export interface Candidate extends Pick<Voter, 'firstAt' | 'lastAt'> {
  role: PassageRole;
  visits: readonly Evidence[];
}

/**
 * A car that stands, or went back, says nothing of where its train went. Nor does, where there are
 * two offsets, one tag heard by one antenna: that may be a car beside the track, and whoever really
 * goes by is heard by more.
 */
export function mayVote(
  { role, firstAt, lastAt, visits }: Candidate,
  severalOffsets: boolean,
): boolean {
  if (role === 'returned' || lastAt - firstAt > STANDING_MS) return false;
  const [only, ...others] = visits;
  return !severalOffsets || others.length > 0 || !only || onlyGroup(only) === null;
}

const LEAST_VOTES = 3;
const MAJORITY = 0.6;
const HOUR_MS = 3_600_000;

/**
 * Direction of a pass from where its units were before and after: at least three that vote, or
 * all of them, and 60 % for one way. Null: cannot be told.
 */
export function directionByHistory(
  network: Network,
  readPointId: number,
  voters: readonly Voter[],
): Direction | null {
  const point = network.readPoint(readPointId);
  if (point.kind === 'spot') return null;
  const votes = voters.flatMap((voter) => voteOf(network, point, voter) ?? []);
  if (votes.length === 0) return null;
  if (votes.length < LEAST_VOTES && votes.length < voters.length) return null;
  const increasing = votes.filter((vote) => vote === 'increasing').length;
  if (increasing / votes.length >= MAJORITY) return 'increasing';
  return (votes.length - increasing) / votes.length >= MAJORITY ? 'decreasing' : null;
}

/** It came from the side where it was, and went to the side where it is next. */
function voteOf(network: Network, point: ReadPointConfiguration, voter: Voter): Direction | null {
  const { before, after } = voter;
  const came = before && cameFrom(network, point, before, voter);
  const went = after && wentTo(network, point, after, voter);
  if (came && went) return opposite(came) === went ? went : null;
  if (came) return opposite(came);
  return went ?? null;
}

function cameFrom(
  network: Network,
  point: ReadPointConfiguration,
  before: Adjacent,
  voter: Voter,
): Direction | null {
  if (before.readPointId !== point.id) return sideOf(network, point, before.readPointId);
  if (!before.direction || isTooLong(network, point, voter.firstAt - before.lastAt)) return null;
  return before.direction;
}

function wentTo(
  network: Network,
  point: ReadPointConfiguration,
  after: Adjacent,
  voter: Voter,
): Direction | null {
  if (after.readPointId !== point.id) return sideOf(network, point, after.readPointId);
  const isOwn = after.basis === 'sensors' || after.basis === 'antennas';
  if (!after.direction || !isOwn) return null;
  if (isTooLong(network, point, after.firstAt - voter.lastAt)) return null;
  return opposite(after.direction);
}

/** Where a lead is not equipped, a unit may come and go unseen in the long run. */
function isTooLong(network: Network, { siteId }: ReadPointConfiguration, ms: number): boolean {
  const { leads, returnHours } = network.site(siteId);
  return leads.some(({ equipped }) => !equipped) && ms > returnHours * HOUR_MS;
}

function sideOf(
  network: Network,
  point: ReadPointConfiguration,
  otherId: number,
): Direction | null {
  const other = network.readPoint(otherId);
  return sideOfPoint(network, point.id, other.siteId);
}

function opposite(direction: Direction): Direction {
  return direction === 'increasing' ? 'decreasing' : 'increasing';
}
