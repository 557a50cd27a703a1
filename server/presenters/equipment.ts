import type { EquipmentItem, lastSeenBases } from '../contract/equipment.js';
import { FAR } from '../lib/sentinels.js';
import { passIdOf } from './pass-id.js';

/** What `presentEquipment` takes: a joined row of last seen, unit, owner, site and read point. */
export interface EquipmentRecord {
  kind: string;
  car_type: string | null;
  registered: number | boolean;
  owner_id: number | null;
  owner_code: string | null;
  owner_name: string | null;
  at: Date;
  state: string;
  track: string | null;
  direction: string | null;
  basis: string | null;
  pass_started_at: Date | null;
  pass_ordinal: number | null;
  arrived_at: Date | null;
  stay_first_seen_at: Date | null;
  quiet_at: Date;
  limit_at: Date;
  site_code: string | null;
  site_name: string | null;
  latitude: number | null;
  longitude: number | null;
  dwell_limit_hours: number | null;
  read_point_code: string | null;
  read_point_name: string | null;
  read_point_site_code: string | null;
}

export interface IdentityRecord {
  compact: string;
  scheme: string;
  display: string;
}

/** Whole minutes from one instant to another. */
export const minutesBetween = (from: Date, to: Date): number =>
  Math.floor((to.getTime() - from.getTime()) / 60_000);

/** An instant for the wire; null where there is none. */
export const instantOrNull = (instant: Date | null): string | null =>
  instant?.toISOString() ?? null;

/** A row of the list; `now` is what quiet, past limit and dwell are reckoned by. */
export function presentEquipment(
  row: EquipmentRecord,
  identity: IdentityRecord,
  now: Date,
): EquipmentItem {
  const registered = Boolean(row.registered);
  const state = row.state as EquipmentItem['state'];
  return {
    unitId: identity.compact,
    display: identity.display,
    scheme: identity.scheme as EquipmentItem['scheme'],
    kind: row.kind as EquipmentItem['kind'],
    carType: row.car_type,
    registered,
    owner:
      row.owner_id === null
        ? null
        : { id: row.owner_id, code: row.owner_code ?? '', name: row.owner_name ?? '' },
    state,
    quiet: registered && row.quiet_at <= now,
    quietAt: registered ? applicable(row.quiet_at) : null,
    pastLimit: row.limit_at <= now,
    lastSeen: state === 'unseen' ? null : presentLastSeen(row),
    between: state === 'enRoute' ? { from: siteNameOf(row) } : null,
    stay: state === 'onHand' ? presentPresentStay(row, now) : null,
  };
}

function presentLastSeen(row: EquipmentRecord): EquipmentItem['lastSeen'] {
  const site = siteNameOf(row);
  return {
    site: site && { ...site, latitude: row.latitude ?? 0, longitude: row.longitude ?? 0 },
    track: row.track,
    readPoint:
      row.read_point_code === null
        ? null
        : { code: row.read_point_code, name: row.read_point_name ?? '' },
    at: row.at.toISOString(),
    direction: (row.direction ?? 'unknown') as 'increasing' | 'decreasing' | 'unknown',
    basis: (row.basis ?? 'read') as (typeof lastSeenBases)[number],
    passId: passOf(row),
  };
}

function presentPresentStay(row: EquipmentRecord, now: Date): EquipmentItem['stay'] {
  const firstSeenAt = row.stay_first_seen_at ?? row.at;
  const hasLimit = row.limit_at < FAR;
  return {
    arrivedAt: instantOrNull(row.arrived_at),
    firstSeenAt: firstSeenAt.toISOString(),
    dwellMinutes: Math.max(0, minutesBetween(row.arrived_at ?? firstSeenAt, now)),
    atLeast: row.arrived_at === null,
    limitHours: hasLimit ? row.dwell_limit_hours : null,
    limitAt: hasLimit ? row.limit_at.toISOString() : null,
  };
}

function passOf(row: EquipmentRecord): string | null {
  if (!row.pass_started_at || row.read_point_site_code === null || row.read_point_code === null) {
    return null;
  }
  return passIdOf({
    siteCode: row.read_point_site_code,
    readPointCode: row.read_point_code,
    startedAt: row.pass_started_at,
    ordinal: row.pass_ordinal ?? 0,
  });
}

function siteNameOf(row: EquipmentRecord): { code: string; name: string } | null {
  return row.site_code === null ? null : { code: row.site_code, name: row.site_name ?? '' };
}

const applicable = (instant: Date): string | null => (instant < FAR ? instant.toISOString() : null);
