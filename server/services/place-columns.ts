import type { Place, ReadPointInput } from '../contract/administration.js';
import type { PointerTo } from '../lib/batch.js';
import type { Faults } from '../lib/faults.js';
import type { ReadPoint } from '../models/read-point.js';

interface Sides {
  decreasing: Place | null;
  increasing: Place | null;
}

/** Sides that are given, else those it has; a new spot without sides stands in its own site. */
export function placeColumns(
  item: ReadPointInput,
  present: ReadPoint | undefined,
  siteIds: Map<string, number>,
  faults: Faults,
  at: PointerTo,
) {
  const { decreasing, increasing } = item.kind === 'spot' ? spotSides(item) : lineSides(item);
  if (item.kind === 'spot') faultSpot(item, faults, at);
  else if (!present) {
    for (const side of ['decreasingPlace', 'increasingPlace'] as const) {
      if (item[side] === undefined) {
        faults.add(at(side), 'is missing: a site, or null for the open line');
      }
    }
  }
  const idOf = (place: Place | null) => (place ? (siteIds.get(place.site) ?? null) : null);
  return {
    decreasingSiteId:
      decreasing === undefined ? (present?.decreasingSiteId ?? null) : idOf(decreasing),
    decreasingTrack:
      decreasing === undefined ? (present?.decreasingTrack ?? null) : (decreasing?.track ?? null),
    increasingSiteId:
      increasing === undefined ? (present?.increasingSiteId ?? null) : idOf(increasing),
    increasingTrack:
      increasing === undefined ? (present?.increasingTrack ?? null) : (increasing?.track ?? null),
  };
}

function lineSides(item: ReadPointInput): Partial<Sides> {
  return { decreasing: item.decreasingPlace, increasing: item.increasingPlace };
}

/** A spot has one place on both sides. */
function spotSides(item: ReadPointInput): Sides {
  const own = { site: item.site, track: item.track ?? null };
  const place = item.increasingPlace ?? item.decreasingPlace ?? own;
  return { decreasing: place, increasing: place };
}

function faultSpot(item: ReadPointInput, faults: Faults, at: PointerTo): void {
  const { decreasingPlace, increasingPlace } = item;
  for (const side of ['decreasingPlace', 'increasingPlace'] as const) {
    if (item[side] === null) faults.add(at(side), 'must be a site: a spot is never the open line');
  }
  if (decreasingPlace && increasingPlace && !isSamePlace(decreasingPlace, increasingPlace)) {
    faults.add(at('decreasingPlace'), 'must be the increasingPlace: a spot has one place');
  }
}

const isSamePlace = (a: Place, b: Place) => a.site === b.site && a.track === b.track;
