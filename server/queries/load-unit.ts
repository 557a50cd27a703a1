import type { Database } from '../lib/database.js';
import { FAR } from '../lib/sentinels.js';
import { readPointOfSites, type UnitAccess } from './find-openable-units.js';
import { loadEquipment, type Equipment, type EquipmentRow } from './load-equipment.js';
import { ask, sql } from './sql.js';

type LastFact = Pick<
  EquipmentRow,
  | 'at'
  | 'basis'
  | 'direction'
  | 'pass_started_at'
  | 'pass_ordinal'
  | 'site_id'
  | 'site_code'
  | 'site_name'
  | 'latitude'
  | 'longitude'
  | 'read_point_code'
  | 'read_point_name'
  | 'read_point_site_code'
>;

/**
 * A unit as the person may see it. One that is no longer in their lists is shown as it left the
 * last of their sites: en route from there, without a word on what came after. Null: no such unit.
 */
export async function loadUnit(
  db: Database,
  unitId: number,
  access: UnitAccess,
  now: Date,
): Promise<Equipment | null> {
  const [equipment] = await loadEquipment(db, [unitId], now);
  if (!equipment || access.isListed || access.siteIds === null) return equipment ?? null;
  const fact = await lastFactAt(db, unitId, access.siteIds);
  return fact && { ...equipment, row: { ...equipment.row, ...leftBehind(fact) } };
}

function leftBehind(fact: LastFact): Partial<EquipmentRow> {
  return {
    ...fact,
    state: 'enRoute',
    track: null,
    arrived_at: null,
    stay_first_seen_at: null,
    dwell_limit_hours: null,
    site_leads: null,
    quiet_at: FAR,
    limit_at: FAR,
  };
}

/**
 * The later of the last passage at a reader of these sites and the last stay at one of them; a
 * stay without a passage is known from what was reported.
 */
async function lastFactAt(
  db: Database,
  unitId: number,
  siteIds: readonly number[],
): Promise<LastFact | null> {
  const [passages, stays] = await Promise.all([
    ask<LastFact>(
      db,
      sql`SELECT p.last_at AS at, 'read' AS basis, p.direction, p.pass_started_at, p.pass_ordinal,
          rs.id AS site_id, rs.code AS site_code, rs.name AS site_name, rs.latitude, rs.longitude,
          rp.code AS read_point_code, rp.name AS read_point_name, rs.code AS read_point_site_code
        FROM passages p JOIN read_points rp ON rp.id = p.read_point_id
        JOIN sites rs ON rs.id = rp.site_id
        WHERE p.unit_id = ${unitId} AND p.role <> 'stray' AND ${readPointOfSites(siteIds)}
        ORDER BY p.first_at DESC LIMIT 1`,
    ),
    ask<LastFact>(
      db,
      sql`SELECT st.last_seen_at AS at,
          IF('hand' IN (st.arrival_basis, st.departure_basis), 'hand', 'report') AS basis,
          NULL AS direction, NULL AS pass_started_at,
          NULL AS pass_ordinal, s.id AS site_id, s.code AS site_code, s.name AS site_name,
          s.latitude, s.longitude, NULL AS read_point_code, NULL AS read_point_name,
          NULL AS read_point_site_code
        FROM stays st JOIN sites s ON s.id = st.site_id
        WHERE st.unit_id = ${unitId} AND st.site_id IN (${siteIds})
        ORDER BY st.first_seen_at DESC LIMIT 1`,
    ),
  ]);
  const [passage, stay] = [passages[0], stays[0]];
  return !passage || (stay && stay.at > passage.at) ? (stay ?? null) : passage;
}
