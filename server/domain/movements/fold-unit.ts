import { LONGEST_STOP_MS, type Direction, type Network, type Place } from './configuration.js';
import { arrive, bePresent, leave, moveWithin, passOnLine, type Step } from './fold-rules.js';
import type { FoldRows, FoldState } from './fold-state.js';
import type { PassageRole } from './passes.js';

/** A unit at a read point, as its pass left it; instants in ms. */
export interface Sighting {
  readPointId: number;
  firstAt: number;
  lastAt: number;
  role: PassageRole;
  direction: Direction | null;
}

/** The state after a sighting, and the rows that nothing later can change any more. */
export interface FoldStep {
  state: FoldState;
  done: FoldRows;
}

const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;
const LONG_PASSAGE_MS = 2 * MINUTE_MS;

/**
 * Folds the next sighting of a unit (in order of first reads) into its state. `countsMiles` is
 * false for boxes, which ride: their legs have no rail metres until it is known on what.
 */
export function foldSighting(
  network: Network,
  before: FoldState,
  sighting: Sighting,
  countsMiles: boolean,
): FoldStep {
  if (isSameCrossing(before, sighting)) return goOn(before, sighting);
  const move = moveOf(network, sighting);
  const drill = struckDrill(network, before, sighting);
  if (drill) {
    const step = startStep(network, drill.before, sighting, drill.at, countsMiles);
    bePresent(step, move.to, { lingering: false, spot: false });
    return { state: step.state, done: step.done };
  }
  const step = startStep(network, before, sighting, instantOf(sighting, move), countsMiles);
  step.done = settled(before.held);
  apply(step, move, before);
  return { state: step.state, done: step.done };
}

/** A car that stopped astride the reader is read again on its way: it has not crossed twice. */
function isSameCrossing({ previous }: FoldState, sighting: Sighting): boolean {
  return (
    (previous?.direction ?? null) !== null &&
    previous !== null &&
    sighting.role === 'crossing' &&
    previous.readPointId === sighting.readPointId &&
    previous.direction === sighting.direction &&
    sighting.firstAt - previous.at <= LONGEST_STOP_MS
  );
}

function goOn(before: FoldState, { lastAt }: Sighting): FoldStep {
  const previous = before.previous && {
    ...before.previous,
    at: Math.max(before.previous.at, lastAt),
  };
  const stay = before.stay && {
    ...before.stay,
    lastSeenAt: Math.max(before.stay.lastSeenAt, lastAt),
  };
  return { state: { ...before, previous, stay }, done: { stays: [], legs: [] } };
}

/** Rows that later sightings may still change. */
export function openRows(state: FoldState): FoldRows {
  return {
    stays: [...state.held.stays, ...(state.stay ? [state.stay] : [])],
    legs: [...state.held.legs, ...(state.leg ? [state.leg] : [])],
  };
}

interface Move {
  kind: 'crossing' | 'presence' | 'spot';
  from: Place;
  to: Place;
}

function moveOf(network: Network, { readPointId, role, direction }: Sighting): Move {
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
function instantOf(sighting: Sighting, { kind, from, to }: Move): number {
  const leaves = kind === 'crossing' && from !== null && to === null;
  const long = sighting.lastAt - sighting.firstAt > LONG_PASSAGE_MS;
  return leaves && long ? sighting.lastAt : sighting.firstAt;
}

function startStep(
  network: Network,
  before: FoldState,
  sighting: Sighting,
  at: number,
  countsMiles: boolean,
): Step {
  const stay = before.stay && { ...before.stay, arrivalFinalAt: null };
  const state = { ...before, stay, drill: null, held: { stays: [], legs: [] } };
  return { network, state, sighting, at, countsMiles, done: { stays: [], legs: [] } };
}

/** Rows whose drill was not struck: the departure stands. */
function settled(held: FoldRows): FoldRows {
  return {
    stays: held.stays.map((stay) => ({ ...stay, departureFinalAt: null })),
    legs: [...held.legs],
  };
}

function apply(step: Step, { kind, from, to }: Move, before: FoldState): void {
  const place = from ?? to;
  if (!place) return passOnLine(step);
  if (kind === 'spot') return bePresent(step, place, { lingering: false, spot: true });
  if (kind === 'presence')
    return bePresent(step, whereItIs(step, from, to), { lingering: true, spot: false });
  if (!from && to) return arrive(step, to);
  if (from && !to) return leave(step, from.siteId);
  if (from && to && from.siteId === to.siteId) return moveWithin(step, to);
  if (to && isStillAt(step, to.siteId)) return arrive(step, to);
  crossBetween(step, from as NonNullable<Place>, to as NonNullable<Place>, before);
}

/** It crosses in where it already is, and not long unseen: nobody saw it step out and back. */
function isStillAt({ network, state, at }: Step, siteId: number): boolean {
  const { stay, previous } = state;
  if (stay?.siteId !== siteId || stay.departedAt !== null || !previous) return false;
  return at - previous.at < network.site(siteId).returnHours * HOUR_MS;
}

/** Without direction between two sites it is where it already was, else nobody can tell. */
function whereItIs(step: Step, from: Place, to: Place): Place {
  if (!from || !to) return from ?? to;
  if (from.siteId === to.siteId) return { siteId: from.siteId, track: null };
  const { stay } = step.state;
  const open = stay && stay.departedAt === null ? stay.siteId : null;
  const place = [from, to].find(({ siteId }) => siteId === open);
  return place ? { siteId: place.siteId, track: null } : null;
}

/** Out of one site and into the next at the same instant; crossing back soon strikes both. */
function crossBetween(
  step: Step,
  from: NonNullable<Place>,
  to: NonNullable<Place>,
  before: FoldState,
): void {
  const { network, sighting, at, state } = step;
  const earlier = step.done;
  const finalAt = at + network.readPoint(sighting.readPointId).drillMinutes * MINUTE_MS;
  step.done = { stays: [], legs: [] };
  leave(step, from.siteId);
  arrive(step, to);
  if (state.stay) state.stay.arrivalFinalAt = finalAt;
  const left = step.done.stays.at(-1);
  if (left) left.departureFinalAt = finalAt;
  state.held = step.done;
  state.drill = {
    before: { ...before, drill: null, held: { stays: [], legs: [] } },
    readPointId: sighting.readPointId,
    direction: sighting.direction as Direction,
    at,
  };
  step.done = earlier;
}

function struckDrill(network: Network, { drill }: FoldState, sighting: Sighting) {
  if (!drill || sighting.role !== 'crossing') return null;
  if (sighting.readPointId !== drill.readPointId) return null;
  const limit = drill.at + network.readPoint(drill.readPointId).drillMinutes * MINUTE_MS;
  return sighting.direction !== drill.direction && sighting.firstAt <= limit ? drill : null;
}
