import type { Network, Place } from './configuration.js';
import { REFERENCE_SPEED_KMH } from './configuration.js';
import type { FoldRows, FoldState, Leg, Stay } from './fold-state.js';
import type { Sighting } from './fold-unit.js';

/** One sighting on its way into the state; the rules below change `state` and fill `done`. */
export interface Step {
  network: Network;
  state: FoldState;
  done: FoldRows;
  sighting: Sighting;
  /** The instant of the crossing or presence, ms. */
  at: number;
  countsMiles: boolean;
}

type Site = NonNullable<Place>;

const HOUR_MS = 3_600_000;
const LINGER_MS = 30 * 60_000;
const MS_PER_METRE = 3600 / REFERENCE_SPEED_KMH;

/** A crossing in from the line. */
export function arrive(step: Step, place: Site): void {
  const { state, at } = step;
  const { stay, previous } = state;
  const returnMs = step.network.site(place.siteId).returnHours * HOUR_MS;
  if (stay && previous && stay.siteId === place.siteId) {
    if (stay.departedAt === null && at - previous.at < returnMs) {
      if (stay.openedByPresence && at - stay.firstSeenAt <= returnMs) setArrival(state, stay, at);
      return stayOn(step, place.track);
    }
    if (isBackFromOutside(step, returnMs)) return comeBack(step, place.track);
  }
  openStay(step, place, { arrivedAt: at, arrivalBasis: 'read', arrivalBounds: null });
  see(step, place.siteId, false);
}

/** A crossing out of `siteId`. */
export function leave(step: Step, siteId: number): void {
  const { state, at } = step;
  const returnMs = step.network.site(siteId).returnHours * HOUR_MS;
  const there = state.stay?.siteId === siteId;
  if (there && isBackFromOutside(step, returnMs)) comeBack(step, null);
  if (!there || state.stay?.departedAt !== null) {
    const arrival = inferArrival(step, siteId);
    openStay(step, { siteId, track: null }, arrival);
  }
  const stay = state.stay as Stay;
  Object.assign(stay, {
    lastSeenAt: step.sighting.lastAt,
    departedAt: at,
    departureBasis: 'read',
    departureBounds: null,
    departureFinalAt: at + returnMs,
    openedByPresence: false,
  });
  see(step, siteId, true);
}

/** A crossing between two tracks of one site. */
export function moveWithin(step: Step, place: Site): void {
  bePresent(step, place, { lingering: false, spot: false });
}

/** Seen at a line point: it has left wherever it stood. */
export function passOnLine(step: Step): void {
  const { siteId } = step.network.readPoint(step.sighting.readPointId);
  closeInferred(step, siteId, step.at);
  if (step.state.stay) step.state.stay.departureFinalAt = null;
  step.state.trail = [...step.state.trail, siteId];
  see(step, siteId, false);
}

/**
 * Seen without a crossing. `place` null: nobody can tell at which site. `lingering`: shortly after
 * a crossing out it is the departing unit still in the beam.
 */
export function bePresent(
  step: Step,
  place: Place,
  { lingering, spot }: { lingering: boolean; spot: boolean },
): void {
  const { state, at, network, sighting } = step;
  // Between two sites it was at neither of, it is on its way like at a line point.
  if (!place) return passOnLine(step);
  const returnMs = network.site(place.siteId).returnHours * HOUR_MS;
  const { stay, previous } = state;
  if (stay?.siteId === place.siteId) {
    if (stay.departedAt === null) return stayOn(step, place.track);
    if (lingering && previous?.outward && at - stay.departedAt <= LINGER_MS) {
      state.previous = { ...previous, at: Math.max(previous.at, sighting.lastAt) };
      return;
    }
    if (isBackFromOutside(step, returnMs)) return comeBack(step, place.track);
  }
  openStay(step, place, presentSince(step, spot));
  if (state.stay) state.stay.openedByPresence = !spot;
  see(step, place.siteId, false);
}

type Arrival = Pick<Stay, 'arrivedAt' | 'arrivalBasis' | 'arrivalBounds'>;

/** At a spot the first read is the arrival; elsewhere it came between its last two sightings. */
function presentSince({ state, at }: Step, spot: boolean): Arrival {
  if (!state.previous) return unknownArrival(at);
  if (spot) return { arrivedAt: at, arrivalBasis: 'read', arrivalBounds: null };
  const arrivalBounds = { earliest: state.previous.at, latest: at };
  return { arrivedAt: at, arrivalBasis: 'inferred', arrivalBounds };
}

function unknownArrival(at: number): Arrival {
  return {
    arrivedAt: null,
    arrivalBasis: 'unknown',
    arrivalBounds: { earliest: null, latest: at },
  };
}

/**
 * It left without having been seen to arrive. Standing elsewhere until then, as far as anybody
 * knows, it came at the last moment; on its way, as fast as the reference speed allows.
 */
function inferArrival(step: Step, siteId: number): Arrival {
  const { network, state, at } = step;
  const { previous, stay } = state;
  if (!previous || stay?.departedAt === null) return presentSince(step, false);
  const travel = travelMs(network, previous.siteId, siteId);
  return {
    arrivedAt: clamp(previous.at + travel, previous.at, at),
    arrivalBasis: 'inferred',
    arrivalBounds: { earliest: previous.at, latest: at },
  };
}

function setArrival(state: FoldState, stay: Stay, at: number): void {
  if (state.leg) state.leg = { ...state.leg, arrivedAt: at };
  const arrival = { arrivedAt: at, arrivalBasis: 'read', arrivalBounds: null } as const;
  Object.assign(stay, arrival, { openedByPresence: false });
}

/** It went out to the line and the next that is seen of it is here again, soon enough. */
function isBackFromOutside({ state, at }: Step, returnMs: number): boolean {
  const { stay, previous } = state;
  if (!stay || stay.departedAt === null || !previous?.outward) return false;
  return previous.siteId === stay.siteId && at - stay.departedAt <= returnMs;
}

function comeBack(step: Step, track: string | null): void {
  const stay = step.state.stay as Stay;
  Object.assign(stay, {
    departedAt: null,
    departureBasis: null,
    departureBounds: null,
    departureFinalAt: null,
    excursions: stay.excursions + 1,
  });
  stayOn(step, track);
}

function stayOn(step: Step, track: string | null): void {
  const stay = step.state.stay as Stay;
  stay.lastSeenAt = Math.max(stay.lastSeenAt, step.sighting.lastAt);
  stay.track = track ?? stay.track;
  see(step, stay.siteId, false);
}

function see({ state, sighting }: Step, siteId: number, outward: boolean): void {
  const { readPointId, lastAt } = sighting;
  const direction = sighting.role === 'crossing' ? sighting.direction : null;
  const at = Math.max(lastAt, state.previous?.at ?? -Infinity);
  state.previous = { at, siteId, readPointId, outward, direction };
}

/** Ends the stay before (guessing its departure where nobody saw it) and begins the next one. */
function openStay(step: Step, place: Site, arrival: Arrival): void {
  const { state, at, sighting, done } = step;
  closeInferred(step, place.siteId, arrival.arrivedAt ?? at);
  const before = state.stay;
  const stay: Stay = {
    siteId: place.siteId,
    firstSeenAt: Math.min(at, sighting.firstAt),
    lastSeenAt: sighting.lastAt,
    track: place.track,
    ...arrival,
    arrivalFinalAt: null,
    departedAt: null,
    departureBasis: null,
    departureBounds: null,
    departureFinalAt: null,
    excursions: 0,
    outOfDwell: false,
    openedByPresence: false,
  };
  if (before) done.stays.push({ ...before, departureFinalAt: null });
  if (state.leg) done.legs.push(state.leg);
  state.leg = before ? legBetween(step, before, stay) : null;
  state.stay = stay;
  state.trail = [];
}

function legBetween({ network, state, countsMiles }: Step, before: Stay, stay: Stay): Leg {
  const places = [before.siteId, ...state.trail, stay.siteId];
  let railMetres = 0;
  let estimated = false;
  places.slice(1).forEach((siteId, index) => {
    const route = network.routes.between(places[index] as number, siteId);
    railMetres += route?.railMetres ?? 0;
    estimated ||= route?.estimated ?? true;
  });
  return {
    fromSiteId: before.siteId,
    fromFirstSeenAt: before.firstSeenAt,
    toSiteId: stay.siteId,
    toFirstSeenAt: stay.firstSeenAt,
    departedAt: before.departedAt as number,
    arrivedAt: stay.arrivedAt,
    railMetres: countsMiles ? railMetres : 0,
    estimated,
  };
}

/** Closes an open stay whose end nobody saw, the next sighting being at `nextSiteId`, `nextAt`. */
function closeInferred({ network, state, at }: Step, nextSiteId: number, nextAt: number): void {
  const { stay, previous } = state;
  if (!stay || !previous || stay.departedAt !== null) return;
  const sameSite = stay.siteId === nextSiteId;
  const travel = travelMs(network, stay.siteId, nextSiteId);
  Object.assign(stay, {
    departedAt: sameSite
      ? Math.floor((previous.at + nextAt) / 2)
      : clamp(nextAt - travel, previous.at, nextAt),
    departureBasis: 'inferred',
    departureBounds: { earliest: previous.at, latest: at },
    departureFinalAt: null,
    outOfDwell: sameSite,
    openedByPresence: false,
  });
}

/** Time over the rails between two sites at the reference speed, ms; 0 where nothing joins them. */
function travelMs(network: Network, fromSiteId: number, toSiteId: number): number {
  const route = network.routes.between(fromSiteId, toSiteId);
  return Math.round((route?.railMetres ?? 0) * MS_PER_METRE);
}

/** `value` between the bounds; the upper one holds where they cross (a clock that ran ahead). */
function clamp(value: number, lowest: number, highest: number): number {
  return Math.min(Math.max(value, lowest), highest);
}
