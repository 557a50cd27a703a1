import type { Companions } from './companions.js';
import type { Network, Place } from './configuration.js';
import type { FoldRows, FoldState, Stay } from './fold-state.js';
import {
  closeInferred,
  inferArrival,
  legBetween,
  presentSince,
  type Arrival,
} from './infer-stays.js';
import { isReport, type Fact } from './sighting.js';

/** One fact on its way into the state; the rules below change `state` and fill `done`. */
export interface Step {
  network: Network;
  state: FoldState;
  done: FoldRows;
  fact: Fact;
  /** The instant of the crossing or presence, ms. */
  at: number;
  countsMiles: boolean;
  companions: Companions;
}

/** A place at a site. */
export type Site = NonNullable<Place>;

const HOUR_MS = 3_600_000;
const LINGER_MS = 30 * 60_000;

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

/** Somebody says that it arrived: so it did, unless it is known to be there already. */
export function reportArrival(step: Step, place: Site, basis: 'report' | 'hand'): void {
  const { stay } = step.state;
  if (stay?.siteId === place.siteId) {
    const returnMs = step.network.site(place.siteId).returnHours * HOUR_MS;
    if (stay.departedAt === null) return stayOn(step, place.track);
    if (isBackFromOutside(step, returnMs)) return comeBack(step, place.track);
  }
  openStay(step, place, { arrivedAt: step.at, arrivalBasis: basis, arrivalBounds: null });
  // An inward crossing read soon after is this very arrival.
  if (step.state.stay) step.state.stay.openedByPresence = true;
  see(step, place.siteId, false);
}

/** It left `siteId`: a crossing out, or what somebody reported. */
export function leave(
  step: Step,
  siteId: number,
  basis: 'read' | 'report' | 'hand' = 'read',
): void {
  const { state, at } = step;
  const returnMs = step.network.site(siteId).returnHours * HOUR_MS;
  const there = state.stay?.siteId === siteId;
  if (there && isBackFromOutside(step, returnMs)) {
    // What was reported of this very departure gives way to what was seen of it.
    if (isRead(state.stay?.departureBasis)) comeBack(step, null);
    else reopen(state.stay as Stay);
  }
  if (!there || state.stay?.departedAt !== null) {
    const arrival = inferArrival(step, siteId);
    openStay(step, { siteId, track: null }, arrival);
  }
  const stay = state.stay as Stay;
  Object.assign(stay, {
    lastSeenAt: Math.max(stay.lastSeenAt, step.fact.lastAt),
    departedAt: at,
    departureBasis: basis,
    departureBounds: null,
    departureFinalAt: at + returnMs,
    openedByPresence: false,
  });
  see(step, siteId, true);
}

function isRead(basis: Stay['departureBasis'] | undefined): boolean {
  return basis !== 'report' && basis !== 'hand';
}

/** A crossing between two tracks of one site. */
export function moveWithin(step: Step, place: Site): void {
  bePresent(step, place, { lingering: false, spot: false });
}

/** Seen at a line point: it has left wherever it stood. */
export function passOnLine(step: Step): void {
  if (isReport(step.fact)) return;
  const { siteId } = step.network.readPoint(step.fact.readPointId);
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
  const { state, at, network, fact } = step;
  // Between two sites it was at neither of, it is on its way like at a line point.
  if (!place) return passOnLine(step);
  const returnMs = network.site(place.siteId).returnHours * HOUR_MS;
  const { stay, previous } = state;
  if (stay?.siteId === place.siteId) {
    if (stay.departedAt === null) return stayOn(step, place.track);
    if (lingering && previous?.outward && at - stay.departedAt <= LINGER_MS) {
      state.previous = { ...previous, at: Math.max(previous.at, fact.lastAt) };
      return;
    }
    if (isBackFromOutside(step, returnMs)) return comeBack(step, place.track);
  }
  openStay(step, place, presentSince(step, spot));
  if (state.stay) state.stay.openedByPresence = !spot;
  see(step, place.siteId, false);
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
  reopen(stay);
  stay.excursions += 1;
  stayOn(step, track);
}

function reopen(stay: Stay): void {
  Object.assign(stay, {
    departedAt: null,
    departureBasis: null,
    departureBounds: null,
    departureFinalAt: null,
  });
}

function stayOn(step: Step, track: string | null): void {
  const stay = step.state.stay as Stay;
  stay.lastSeenAt = Math.max(stay.lastSeenAt, step.fact.lastAt);
  stay.track = track ?? stay.track;
  see(step, stay.siteId, false);
}

function see({ state, fact }: Step, siteId: number, outward: boolean): void {
  const { firstAt, lastAt } = fact;
  const at = Math.max(lastAt, state.previous?.at ?? -Infinity);
  if (isReport(fact)) {
    const { basis } = fact;
    const nobody = { readPointId: null, pass: null, direction: null };
    state.previous = { firstAt, at, siteId, basis, outward, ...nobody };
    return;
  }
  const { readPointId, pass, role } = fact;
  const direction = role === 'crossing' ? fact.direction : null;
  const basis = 'read';
  state.previous = { firstAt, at, siteId, readPointId, pass, basis, outward, direction };
}

/** Ends the stay before (guessing its departure where nobody saw it) and begins the next one. */
export function openStay(step: Step, place: Site, arrival: Arrival): void {
  const { state, at, fact, done } = step;
  closeInferred(step, place.siteId, arrival.arrivedAt ?? at);
  const before = state.stay;
  const stay: Stay = {
    siteId: place.siteId,
    firstSeenAt: Math.min(at, fact.firstAt),
    lastSeenAt: fact.lastAt,
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
