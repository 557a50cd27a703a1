import type { Database } from '../../server/lib/database.js';
import { FAR, NEVER_SEEN } from '../../server/lib/sentinels.js';
import { modelsOf } from '../../server/models/index.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';

const HOUR_MS = 3_600_000;

/** Where a unit is, as the projector would have written it; writing again replaces it. */
export type Place =
  | { state: 'unseen' }
  /** Last read at `at`, gone from `site`. */
  | { state: 'enRoute'; site: Site; at: Date }
  /** Standing at `site` since `arrivedAt`; null: it was there when first seen, at `at`. */
  | { state: 'onHand'; site: Site; at: Date; arrivedAt: Date | null; arrivalFinalAt?: Date }
  /** Left `site` at `at` after it came at `arrivedAt`; provisional until `finalAt`. */
  | { state: 'left'; site: Site; at: Date; arrivedAt: Date; finalAt: Date | null };

/** Writes the rows of last seen, visible units and stays that say where a unit is. */
export async function placeUnit(db: Database, unit: Unit, place: Place): Promise<void> {
  const { LastSeen, Stay } = modelsOf(db.sequelize);
  const { site, at } = place.state === 'unseen' ? { site: null, at: NEVER_SEEN } : place;
  const stay = stayOf(unit, place);
  await Stay.destroy({ where: { unitId: unit.id } });
  if (stay) await Stay.create(stay);
  const state = place.state === 'left' ? 'enRoute' : place.state;
  const quietAt = state === 'enRoute' ? new Date(at.getTime() + 72 * HOUR_MS) : FAR;
  const since = place.state === 'onHand' ? (place.arrivedAt ?? at) : null;
  // The type does not say that a site just created lacks the defaults of its columns.
  const { dwellLimitHours: limitHours = 96 }: Partial<Site> = site ?? {};
  const limitAt = since ? new Date(since.getTime() + limitHours * HOUR_MS) : FAR;
  await LastSeen.destroy({ where: { unitId: unit.id } });
  await LastSeen.create({
    unitId: unit.id,
    at,
    state,
    siteId: site?.id ?? null,
    track: null,
    readPointId: null,
    direction: site ? 'increasing' : null,
    basis: site ? 'read' : null,
    passStartedAt: null,
    passOrdinal: null,
    staySiteId: stay?.siteId ?? null,
    stayFirstSeenAt: stay?.firstSeenAt ?? null,
    arrivedAt: place.state === 'onHand' ? place.arrivedAt : null,
    quietAt,
    limitAt,
  });
  await db.pool.query('DELETE FROM visible_units WHERE unit_id = ?', [unit.id]);
  if (unit.ownerId === null) return;
  await db.pool.query(
    `INSERT INTO visible_units (org_id, unit_id, at, state, site_id, quiet_at, limit_at)
     VALUES (?, ?, ?, ?, ?, ?, ?)`,
    [unit.ownerId, unit.id, at, state, site?.id ?? 0, quietAt, limitAt],
  );
}

function stayOf(unit: Unit, place: Place) {
  if (place.state !== 'onHand' && place.state !== 'left') return null;
  const hasLeft = place.state === 'left';
  return {
    unitId: unit.id,
    siteId: place.site.id,
    firstSeenAt: place.arrivedAt ?? place.at,
    lastSeenAt: place.at,
    track: null,
    arrivedAt: place.arrivedAt,
    arrivalBasis: place.arrivedAt ? 'read' : 'unknown',
    arrivalEarliest: null,
    arrivalLatest: null,
    arrivalFinalAt: hasLeft ? null : (place.arrivalFinalAt ?? null),
    departedAt: hasLeft ? place.at : null,
    departureBasis: hasLeft ? 'read' : null,
    departureEarliest: null,
    departureLatest: null,
    departureFinalAt: hasLeft ? place.finalAt : null,
    excursions: 0,
    outOfDwell: false,
  };
}
