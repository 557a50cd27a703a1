import type { LegView, StayView } from '../contract/movements.js';
import { instantOrNull, minutesBetween } from './equipment.js';

/** What `presentStay` takes: a row of `stays` with its site's code and name. */
export interface StayRecord {
  site_code: string;
  site_name: string;
  first_seen_at: Date;
  last_seen_at: Date;
  track: string | null;
  arrived_at: Date | null;
  arrival_basis: string;
  arrival_earliest: Date | null;
  arrival_latest: Date | null;
  arrival_final_at: Date | null;
  departed_at: Date | null;
  departure_basis: string | null;
  departure_earliest: Date | null;
  departure_latest: Date | null;
  departure_final_at: Date | null;
  excursions: number;
  out_of_dwell: number;
}

/**
 * A stay; provisional and, while it goes on, dwell are reckoned at `now`. `through` null: an end of
 * it was not read, so nobody can say.
 */
export function presentStay(row: StayRecord, now: Date, through: boolean | null): StayView {
  const begin = row.arrived_at ?? row.first_seen_at;
  const arrivalProvisional = isAhead(row.arrival_final_at, now);
  const departureProvisional = row.departed_at !== null && isAhead(row.departure_final_at, now);
  return {
    site: { code: row.site_code, name: row.site_name },
    track: row.track,
    firstSeenAt: row.first_seen_at.toISOString(),
    lastSeenAt: row.last_seen_at.toISOString(),
    arrivedAt: instantOrNull(row.arrived_at),
    arrivalBasis: row.arrival_basis as StayView['arrivalBasis'],
    arrivalBounds: boundsOf(row.arrival_basis, row.arrival_earliest, row.arrival_latest),
    arrivalProvisional,
    departedAt: instantOrNull(row.departed_at),
    departureBasis: row.departure_basis as StayView['departureBasis'],
    departureBounds: boundsOf(row.departure_basis, row.departure_earliest, row.departure_latest),
    departureProvisional,
    provisional: arrivalProvisional || departureProvisional,
    through,
    dwellMinutes: Math.max(0, minutesBetween(begin, row.departed_at ?? now)),
    atLeast: row.arrived_at === null,
    outOfDwell: Boolean(row.out_of_dwell),
    excursions: row.excursions,
  };
}

/** What `presentLeg` takes: a row of `legs` with the names of its two sites. */
export interface LegRecord {
  from_code: string;
  from_name: string;
  to_code: string;
  to_name: string;
  departed_at: Date;
  arrived_at: Date | null;
  rail_metres: number;
  estimated: number;
}

/** A leg between two stays. */
export function presentLeg(row: LegRecord): LegView {
  return {
    from: { code: row.from_code, name: row.from_name },
    to: { code: row.to_code, name: row.to_name },
    departedAt: row.departed_at.toISOString(),
    arrivedAt: instantOrNull(row.arrived_at),
    railMetres: row.rail_metres,
    minutes: row.arrived_at && minutesBetween(row.departed_at, row.arrived_at),
    estimated: Boolean(row.estimated),
  };
}

const isAhead = (instant: Date | null, now: Date): boolean => instant !== null && now < instant;

/** What was observed has no bounds; a report may have: not there, so gone since it was last seen. */
function boundsOf(
  basis: string | null,
  earliest: Date | null,
  latest: Date | null,
): StayView['arrivalBounds'] {
  const isReckoned = basis === 'inferred' || basis === 'unknown';
  const isSaid = (basis === 'report' || basis === 'hand') && (earliest ?? latest) !== null;
  if (!isReckoned && !isSaid) return null;
  return { earliest: instantOrNull(earliest), latest: instantOrNull(latest) };
}
