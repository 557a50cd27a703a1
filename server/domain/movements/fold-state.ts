import type { Direction } from './configuration.js';
import type { Doubt } from './doubt.js';
import type { PassKey } from './passes.js';
import type { Sighting } from './sighting.js';

/** How an arrival or departure is known. */
export type Basis = 'read' | 'report' | 'hand' | 'inferred' | 'unknown';

/** A unit at a site; instants in ms. */
export interface Stay {
  siteId: number;
  firstSeenAt: number;
  lastSeenAt: number;
  track: string | null;
  /** Null: it was there before anybody looked. */
  arrivedAt: number | null;
  arrivalBasis: Basis;
  /** Bounds where the instant was not observed; `earliest` null: no telling. */
  arrivalBounds: Bounds | null;
  /** Until then the arrival may turn out to be a mere drill; null: final. */
  arrivalFinalAt: number | null;
  departedAt: number | null;
  departureBasis: Exclude<Basis, 'unknown'> | null;
  departureBounds: Bounds | null;
  /** Until then it may come back and not have left at all; null: final. */
  departureFinalAt: number | null;
  /** Times it went out to the line and was soon back. */
  excursions: number;
  /** Its end is a guess too wide for dwell figures. */
  outOfDwell: boolean;
  /** Opened by a sighting without direction; an inward crossing soon after sets the arrival. */
  openedByPresence: boolean;
}

export interface Bounds {
  earliest: number | null;
  latest: number;
}

/** The way between two consecutive stays of a unit. */
export interface Leg {
  fromSiteId: number;
  fromFirstSeenAt: number;
  toSiteId: number;
  toFirstSeenAt: number;
  departedAt: number;
  /** Null: the arrival is not known. */
  arrivedAt: number | null;
  railMetres: number;
  estimated: boolean;
}

/** The last that is known of a unit's place, as what comes next is judged by it. */
export interface Previous {
  /** First and last read of it, ms. */
  firstAt: number;
  at: number;
  /** Where it was seen: the site it was at, left or (a line point) passed. */
  siteId: number;
  /** Null: no reader saw it there. */
  readPointId: number | null;
  pass: PassKey | null;
  basis: 'read' | 'report' | 'hand';
  /** It was a crossing out to the line from that site. */
  outward: boolean;
  /** Its direction where it was a crossing. */
  direction: Direction | null;
}

/** Everything about a unit's past that its next sighting can change or is judged by. */
export interface FoldState {
  /** Its last stay, open or closed. */
  stay: Stay | null;
  /** The leg that led into that stay. */
  leg: Leg | null;
  previous: Previous | null;
  /** Sites (line points included) where it was seen since it left its last stay's site. */
  trail: number[];
  /** The crossing between two sites just made, while crossing back would strike both. */
  drill: Drill | null;
  /** Rows that are done unless the drill is struck. */
  held: FoldRows;
  /** The last sighting, when no train could have made it; it has moved nothing so far. */
  doubted: { sighting: Sighting; doubt: Doubt } | null;
}

export interface Drill {
  before: FoldState;
  readPointId: number;
  direction: Direction;
  at: number;
}

export interface FoldRows {
  stays: Stay[];
  legs: Leg[];
  doubts: Doubt[];
}

export function noRows(): FoldRows {
  return { stays: [], legs: [], doubts: [] };
}

/** A unit that nobody has seen. */
export function nothingKnown(): FoldState {
  const held = noRows();
  return { stay: null, leg: null, previous: null, trail: [], drill: null, held, doubted: null };
}

/** What tells a unit's stays apart; legs go by the stay they lead to. */
export type StayKey = Pick<Stay, 'siteId' | 'firstSeenAt'>;

/** Which stored rows a fold that starts from a checkpoint may change. */
export interface Changeable {
  /** No row of an earlier first sighting (ms) is among them. */
  since: number;
  includes(key: StayKey): boolean;
  /** Doubts of sightings from this instant (ms) on are. */
  doubtsSince: number;
}

/** Rows that a fold from `state` on, over the facts from `beforeAt` (ms) on, may change. */
export function changeableFrom(state: FoldState, beforeAt: number): Changeable {
  const keys = mutableStays(state);
  // A doubted sighting may come to count, or cease to.
  const from = Math.min(beforeAt, state.doubted?.doubt.at ?? beforeAt);
  return {
    since: Math.min(from, ...keys.map((key) => key.firstSeenAt)),
    doubtsSince: from,
    includes: ({ siteId, firstSeenAt }) =>
      firstSeenAt >= from ||
      keys.some((key) => key.siteId === siteId && key.firstSeenAt === firstSeenAt),
  };
}

function mutableStays(state: FoldState): StayKey[] {
  return [
    ...(state.stay ? [state.stay] : []),
    ...state.held.stays,
    ...(state.drill ? mutableStays(state.drill.before) : []),
  ];
}
