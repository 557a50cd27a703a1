import type { Database } from '../lib/database.js';
import { ask, sql, type Sql } from './sql.js';
import type { EquipmentRecord } from '../presenters/equipment.js';

/** What the list and the unit page need of one unit; names as in the tables. */
export interface EquipmentRow extends EquipmentRecord {
  unit_id: number;
  length_dm: number | null;
  axles: number | null;
  site_id: number | null;
  site_leads: string | null;
}

export interface IdentityRow {
  unit_id: number;
  id: number;
  compact: string;
  scheme: string;
  mark: string;
  number: string;
  display: string;
  valid_from: Date | null;
  valid_to: Date | null;
}

/** A unit's row with all its identities, the one of now first. */
export interface Equipment {
  row: EquipmentRow;
  identities: [IdentityRow, ...IdentityRow[]];
}

const factsOf = (unitIds: readonly number[]): Sql => sql`
  SELECT l.unit_id, u.kind, u.car_type, u.registered, u.length_dm, u.axles, u.owner_id,
    o.code AS owner_code, o.name AS owner_name, l.at, l.state, l.track, l.direction, l.basis,
    l.pass_started_at, l.pass_ordinal, l.arrived_at, l.stay_first_seen_at, l.quiet_at, l.limit_at,
    l.site_id, st.code AS site_code, st.name AS site_name, st.latitude, st.longitude,
    st.leads AS site_leads, st.dwell_limit_hours, rp.code AS read_point_code, rp.name AS read_point_name,
    rs.code AS read_point_site_code
  FROM last_seen l
  JOIN units u ON u.id = l.unit_id
  LEFT JOIN organisations o ON o.id = u.owner_id
  LEFT JOIN sites st ON st.id = l.site_id
  LEFT JOIN read_points rp ON rp.id = l.read_point_id
  LEFT JOIN sites rs ON rs.id = rp.site_id
  WHERE l.unit_id IN (${unitIds})`;

/** The units in the order of the ids; narrows nothing. Always two statements, none for no ids. */
export async function loadEquipment(
  db: Database,
  unitIds: readonly number[],
  now: Date,
): Promise<Equipment[]> {
  if (unitIds.length === 0) return [];
  const [rows, identities] = await Promise.all([
    ask<EquipmentRow>(db, factsOf(unitIds)),
    loadIdentities(db, unitIds, now),
  ]);
  const rowById = new Map(rows.map((row) => [row.unit_id, row]));
  return unitIds.flatMap((unitId) => {
    const row = rowById.get(unitId);
    const [present, ...former] = identities.get(unitId) ?? [];
    return row && present ? [{ row, identities: [present, ...former] }] : [];
  });
}

/** Identities by unit, the one of now first, then the latest first. */
export async function loadIdentities(
  db: Database,
  unitIds: readonly number[],
  now: Date,
): Promise<Map<number, IdentityRow[]>> {
  const byUnit = new Map<number, IdentityRow[]>();
  if (unitIds.length === 0) return byUnit;
  const rows = await ask<IdentityRow>(
    db,
    sql`SELECT unit_id, id, compact, scheme, mark, number, display, valid_from, valid_to
      FROM identities WHERE unit_id IN (${unitIds})`,
  );
  for (const row of rows.sort((a, b) => compareIdentities(a, b, now))) {
    const known = byUnit.get(row.unit_id);
    if (known) known.push(row);
    else byUnit.set(row.unit_id, [row]);
  }
  return byUnit;
}

/** 2: valid now; 1: was valid; 0: is yet to come. */
export function standingOf({ valid_from, valid_to }: IdentityRow, now: Date): 0 | 1 | 2 {
  if (valid_from && valid_from > now) return 0;
  return valid_to && valid_to <= now ? 1 : 2;
}

function compareIdentities(a: IdentityRow, b: IdentityRow, now: Date): number {
  const begin = (row: IdentityRow) => row.valid_from?.getTime() ?? -Infinity;
  const later = begin(b) === begin(a) ? 0 : begin(b) - begin(a);
  return standingOf(b, now) - standingOf(a, now) || later || b.id - a.id;
}
