import { packEvidence } from '../../server/domain/movements/pack-evidence.js';
import type { Database } from '../../server/lib/database.js';
import { FAR, NEVER_SEEN } from '../../server/lib/sentinels.js';
import type { ReadPoint } from '../../server/models/read-point.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';

const HOUR_MS = 3_600_000;

/** Milliseconds of so many hours. */
export const hours = (count: number) => count * HOUR_MS;

interface LastSeenValues {
  state: 'onHand' | 'enRoute' | 'unseen';
  at: Date;
  site: Site | null;
  readPoint: ReadPoint | null;
  direction: string;
  track: string | null;
  passStartedAt: Date | null;
  staySite: Site | null;
  stayFirstSeenAt: Date | null;
  arrivedAt: Date | null;
  quietAt: Date;
  limitAt: Date;
}

/**
 * The rows of last seen and visibility that the projector would leave for the unit. Quiet after
 * 72 h en route and past its limit after the site's hours on hand, unless given.
 */
export async function placeUnit(
  db: Database,
  unit: Unit,
  values: Partial<LastSeenValues> = {},
): Promise<void> {
  const state = values.state ?? (values.at ? 'enRoute' : 'unseen');
  const at = values.at ?? NEVER_SEEN;
  const site = values.site ?? null;
  const isOnHand = state === 'onHand';
  const firstSeenAt = values.stayFirstSeenAt ?? (isOnHand ? at : null);
  const since = values.arrivedAt ?? firstSeenAt ?? at;
  const limitHours = site?.dwellLimitHours ?? 96;
  const quietAt = values.quietAt ?? (state === 'enRoute' ? new Date(+at + hours(72)) : FAR);
  const limitAt = values.limitAt ?? (isOnHand ? new Date(+since + hours(limitHours)) : FAR);
  const staySite = values.staySite ?? (isOnHand ? site : null);
  await db.pool.query(
    `INSERT INTO last_seen (unit_id, at, state, site_id, track, read_point_id, direction, basis,
       pass_started_at, pass_ordinal, stay_site_id, stay_first_seen_at, arrived_at, quiet_at, limit_at)
     VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
    [
      unit.id,
      at,
      state,
      site?.id ?? null,
      values.track ?? null,
      values.readPoint?.id ?? null,
      values.direction ?? 'unknown',
      state === 'unseen' ? null : 'read',
      values.passStartedAt ?? null,
      values.passStartedAt ? 0 : null,
      staySite?.id ?? null,
      firstSeenAt,
      values.arrivedAt ?? null,
      quietAt,
      limitAt,
    ],
  );
  if (!unit.registered || unit.ownerId === null) return;
  await db.pool.query(
    `INSERT INTO visible_units (org_id, unit_id, at, state, site_id, quiet_at, limit_at)
     VALUES (?, ?, ?, ?, ?, ?, ?)`,
    [unit.ownerId, unit.id, at, state, site?.id ?? 0, quietAt, limitAt],
  );
}

interface StayValues {
  site: Site;
  firstSeenAt: Date;
  lastSeenAt: Date;
  arrivedAt: Date | null;
  arrivalBasis: string;
  arrivalEarliest: Date | null;
  arrivalLatest: Date | null;
  arrivalFinalAt: Date | null;
  departedAt: Date | null;
  departureBasis: string | null;
  departureEarliest: Date | null;
  departureLatest: Date | null;
  departureFinalAt: Date | null;
  excursions: number;
  outOfDwell: boolean;
}

/** A row of `stays`: read at arrival, and at departure when one is given. */
export async function buildStay(
  db: Database,
  unit: Unit,
  values: Pick<StayValues, 'site' | 'firstSeenAt'> & Partial<StayValues>,
): Promise<void> {
  const arrivedAt = values.arrivedAt === undefined ? values.firstSeenAt : values.arrivedAt;
  const departedAt = values.departedAt ?? null;
  await db.pool.query(
    `INSERT INTO stays (unit_id, first_seen_at, site_id, last_seen_at, arrived_at, arrival_basis,
       arrival_earliest, arrival_latest, arrival_final_at, departed_at, departure_basis,
       departure_earliest, departure_latest, departure_final_at, excursions, out_of_dwell)
     VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
    [
      unit.id,
      values.firstSeenAt,
      values.site.id,
      values.lastSeenAt ?? departedAt ?? values.firstSeenAt,
      arrivedAt,
      values.arrivalBasis ?? (arrivedAt ? 'read' : 'unknown'),
      values.arrivalEarliest ?? null,
      values.arrivalLatest ?? null,
      values.arrivalFinalAt ?? null,
      departedAt,
      values.departureBasis ?? (departedAt ? 'read' : null),
      values.departureEarliest ?? null,
      values.departureLatest ?? null,
      values.departureFinalAt ?? null,
      values.excursions ?? 0,
      values.outOfDwell ?? false,
    ],
  );
}

/** A row of `legs` between two stays, each given by its site and first sighting. */
export async function buildLeg(
  db: Database,
  unit: Unit,
  values: {
    from: { site: Site; firstSeenAt: Date };
    to: { site: Site; firstSeenAt: Date };
    departedAt: Date;
    arrivedAt: Date | null;
    railMetres: number;
    estimated?: boolean;
  },
): Promise<void> {
  await db.pool.query(
    `INSERT INTO legs (unit_id, to_first_seen_at, to_site_id, from_first_seen_at, from_site_id,
       departed_at, arrived_at, rail_metres, estimated)
     VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)`,
    [
      unit.id,
      values.to.firstSeenAt,
      values.to.site.id,
      values.from.firstSeenAt,
      values.from.site.id,
      values.departedAt,
      values.arrivedAt,
      values.railMetres,
      values.estimated ?? false,
    ],
  );
}

/** A passage of one read by a text tag, in a pass of its own that began with it. */
export async function buildPassage(
  db: Database,
  unit: Unit,
  values: { readPoint: ReadPoint; at: Date; direction?: string; antenna?: number },
): Promise<void> {
  const { readPoint, at, direction = 'unknown', antenna = 1 } = values;
  await db.pool.query(
    `INSERT INTO passages (read_point_id, first_at, unit_id, first_antenna, first_tag, last_at,
       pass_started_at, pass_ordinal, direction, direction_basis, role, read_count, evidence)
     VALUES (?, ?, ?, ?, ?, ?, ?, 0, ?, ?, ?, 1, ?)`,
    [
      readPoint.id,
      at,
      unit.id,
      antenna,
      unit.unitKey,
      at,
      at,
      direction,
      direction === 'unknown' ? null : 'antennas',
      direction === 'unknown' ? 'presence' : 'crossing',
      packEvidence([{ reads: [{ at: at.getTime(), antenna, tag: unit.unitKey }] }]),
    ],
  );
}
