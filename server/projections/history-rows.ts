import type { Doubt } from '../domain/movements/doubt.js';
import type { Leg, Stay } from '../domain/movements/fold-state.js';
import type { SqlValue } from '../lib/bulk.js';
import { FAR, NEVER_SEEN } from '../lib/sentinels.js';
import type { FoldedUnit } from './write-histories.js';

/** Columns of `stays`, the key first, in the order `stayValues` gives them. */
export const STAY_COLUMNS = [
  'unit_id',
  'first_seen_at',
  'site_id',
  'last_seen_at',
  'track',
  'arrived_at',
  'arrival_basis',
  'arrival_earliest',
  'arrival_latest',
  'arrival_final_at',
  'departed_at',
  'departure_basis',
  'departure_earliest',
  'departure_latest',
  'departure_final_at',
  'excursions',
  'out_of_dwell',
] as const;

export function stayValues(unitId: number, stay: Stay): SqlValue[] {
  return [
    unitId,
    new Date(stay.firstSeenAt),
    stay.siteId,
    new Date(stay.lastSeenAt),
    stay.track,
    instant(stay.arrivedAt),
    stay.arrivalBasis,
    instant(stay.arrivalBounds?.earliest),
    instant(stay.arrivalBounds?.latest),
    instant(stay.arrivalFinalAt),
    instant(stay.departedAt),
    stay.departureBasis,
    instant(stay.departureBounds?.earliest),
    instant(stay.departureBounds?.latest),
    instant(stay.departureFinalAt),
    stay.excursions,
    stay.outOfDwell,
  ];
}

/** Columns of `legs`, the key first, in the order `legValues` gives them. */
export const LEG_COLUMNS = [
  'unit_id',
  'to_first_seen_at',
  'to_site_id',
  'from_first_seen_at',
  'from_site_id',
  'departed_at',
  'arrived_at',
  'rail_metres',
  'estimated',
] as const;

export function legValues(unitId: number, leg: Leg): SqlValue[] {
  return [
    unitId,
    new Date(leg.toFirstSeenAt),
    leg.toSiteId,
    new Date(leg.fromFirstSeenAt),
    leg.fromSiteId,
    new Date(leg.departedAt),
    instant(leg.arrivedAt),
    leg.railMetres,
    leg.estimated,
  ];
}

/** Columns of `doubts`, the key first, in the order `doubtValues` gives them. */
export const DOUBT_COLUMNS = [
  'unit_id',
  'at',
  'read_point_id',
  'previous_read_point_id',
  'previous_at',
  'rail_metres',
  'corroborated_by',
] as const;

export function doubtValues(unitId: number, doubt: Doubt): SqlValue[] {
  return [
    unitId,
    new Date(doubt.at),
    doubt.readPointId,
    doubt.previousReadPointId,
    new Date(doubt.previousAt),
    doubt.railMetres,
    doubt.corroboratedBy,
  ];
}

/** Columns of `last_seen`, in the order `lastSeenValues` gives them. */
export const LAST_SEEN_COLUMNS = [
  'unit_id',
  'at',
  'state',
  'site_id',
  'track',
  'read_point_id',
  'direction',
  'basis',
  'pass_started_at',
  'pass_ordinal',
  'stay_site_id',
  'stay_first_seen_at',
  'arrived_at',
  'quiet_at',
  'limit_at',
] as const;

/** A unit without any sighting is `unseen`, its instants the sentinels. */
export function lastSeenValues({ start, history }: FoldedUnit): SqlValue[] {
  const seen = history.lastSeen;
  if (!seen) return unseenValues(start.unitId);
  return [
    start.unitId,
    new Date(seen.at),
    seen.state,
    seen.siteId,
    seen.track,
    seen.readPointId,
    seen.direction ?? 'unknown',
    seen.basis,
    instant(seen.pass?.startedAt),
    seen.pass?.ordinal ?? null,
    seen.staySiteId,
    instant(seen.stayFirstSeenAt),
    instant(seen.arrivedAt),
    instant(seen.quietAt) ?? FAR,
    instant(seen.limitAt) ?? FAR,
  ];
}

/** The last-seen row of a unit that no reader has seen. */
export function unseenValues(unitId: number): SqlValue[] {
  const nothing = Array.from({ length: 10 }, () => null);
  return [unitId, NEVER_SEEN, 'unseen', ...nothing, FAR, FAR];
}

/** Columns of `visible_units`, in the order `visibleValues` gives them. */
export const VISIBLE_COLUMNS = [
  'org_id',
  'unit_id',
  'at',
  'state',
  'site_id',
  'quiet_at',
  'limit_at',
] as const;

/** The copy of a last-seen row (its values) for one organisation. */
export function visibleValues(organisationId: number, lastSeen: readonly SqlValue[]): SqlValue[] {
  const value = (column: (typeof LAST_SEEN_COLUMNS)[number]) =>
    lastSeen[LAST_SEEN_COLUMNS.indexOf(column)] ?? null;
  return [
    organisationId,
    value('unit_id'),
    value('at'),
    value('state'),
    value('site_id') ?? 0,
    value('quiet_at'),
    value('limit_at'),
  ];
}

function instant(ms: number | null | undefined): Date | null {
  return ms === null || ms === undefined ? null : new Date(ms);
}
