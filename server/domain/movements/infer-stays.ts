import { REFERENCE_SPEED_KMH, type Network } from './configuration.js';
import { sharedDeparture } from './companions.js';
import type { Step } from './fold-rules.js';
import type { Leg, Stay } from './fold-state.js';
import { isReport } from './sighting.js';

const MS_PER_METRE = 3600 / REFERENCE_SPEED_KMH;

export type Arrival = Pick<Stay, 'arrivedAt' | 'arrivalBasis' | 'arrivalBounds'>;

/** At a spot the first read is the arrival; elsewhere it came between its last two sightings. */
export function presentSince({ state, at }: Step, spot: boolean): Arrival {
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
export function inferArrival(step: Step, siteId: number): Arrival {
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

/** The way from one stay to the next, by every place where it was seen. */
export function legBetween({ network, state, countsMiles }: Step, before: Stay, stay: Stay): Leg {
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

/**
 * Closes an open stay whose end nobody saw, the next sighting being at `nextSiteId`, `nextAt`: when
 * those that it comes with were seen leaving, it left with them.
 */
export function closeInferred(step: Step, nextSiteId: number, nextAt: number): void {
  const { network, state, at, fact, companions } = step;
  const { stay, previous } = state;
  if (!stay || !previous || stay.departedAt !== null) return;
  const sameSite = stay.siteId === nextSiteId;
  const travel = travelMs(network, stay.siteId, nextSiteId);
  const shared =
    sameSite || isReport(fact) ? null : sharedDeparture(companions, fact.pass, stay.siteId);
  Object.assign(stay, {
    departedAt: sameSite
      ? Math.floor((previous.at + nextAt) / 2)
      : clamp(shared ?? nextAt - travel, previous.at, nextAt),
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
