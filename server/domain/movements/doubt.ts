import type { Network } from './configuration.js';
import type { Previous } from './fold-state.js';
import type { Sighting } from './sighting.js';

/** Two sightings of one unit that no train could join; instants in ms. */
export interface Doubt {
  /** First read of the later one. */
  at: number;
  readPointId: number;
  previousReadPointId: number;
  /** First read of the earlier one. */
  previousAt: number;
  railMetres: number;
  /**
   * What speaks for the later one all the same: units that were with it both times, a sighting at
   * another read point after it, its other tag. Null: nothing, so it moved nothing.
   */
  corroboratedBy: 'mates' | 'point' | 'side' | null;
}

const FASTEST_KMH = 130;
const LEAST_METRES = 20_000;
const MS_PER_HOUR = 3_600_000;

/** The doubt that a sighting raises after what was known before; null when there is none. */
export function doubtOf(
  network: Network,
  previous: Previous | null,
  sighting: Pick<Sighting, 'readPointId' | 'firstAt'>,
): Doubt | null {
  if (previous === null || previous.readPointId === null) return null;
  const to = network.readPoint(sighting.readPointId).siteId;
  const railMetres = metresTooFar(network, previous, to, sighting.firstAt);
  if (railMetres === null) return null;
  return {
    at: sighting.firstAt,
    readPointId: sighting.readPointId,
    previousReadPointId: previous.readPointId,
    previousAt: previous.firstAt,
    railMetres,
    corroboratedBy: null,
  };
}

/** Rail metres to a site that no train could have come by `at` (ms); null when one could. */
export function metresTooFar(
  network: Network,
  previous: Previous,
  siteId: number,
  at: number,
): number | null {
  if (previous.readPointId === null) return null;
  const from = network.readPoint(previous.readPointId).siteId;
  const railMetres = network.routes.between(from, siteId)?.railMetres ?? 0;
  if (railMetres <= LEAST_METRES) return null;
  const hours = (at - previous.at) / MS_PER_HOUR;
  return railMetres / 1000 <= hours * FASTEST_KMH ? null : railMetres;
}

/** True when a sighting fits the doubted one and not what was known before it. */
export function corroborates(
  network: Network,
  previous: Previous | null,
  doubted: Sighting,
  sighting: Sighting,
): boolean {
  if (sighting.readPointId === doubted.readPointId) return false;
  const after: Previous = {
    firstAt: doubted.firstAt,
    at: doubted.lastAt,
    siteId: network.readPoint(doubted.readPointId).siteId,
    readPointId: doubted.readPointId,
    pass: doubted.pass,
    basis: 'read',
    outward: false,
    direction: null,
  };
  return (
    doubtOf(network, after, sighting) === null && doubtOf(network, previous, sighting) !== null
  );
}
