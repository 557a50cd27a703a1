import type { PassView } from '../contract/passes.js';
import { passIdOf } from './pass-id.js';

/** A row of `passes` with the names of where it was. */
export interface PassRecord {
  site_code: string;
  site_name: string;
  read_point_code: string;
  read_point_name: string;
  started_at: Date;
  ordinal: number;
  ended_at: Date;
  direction: string;
  direction_basis: string | null;
  speed_kmh: number | null;
}

export interface PassUnitRecord {
  unit_id: number;
  kind: string;
}

/** A pass; units that `names` does not know are somebody else's. */
export function presentPass(
  row: PassRecord,
  units: readonly PassUnitRecord[],
  names: ReadonlyMap<number, { unitId: string; display: string }>,
): PassView {
  return {
    id: passIdOf({
      siteCode: row.site_code,
      readPointCode: row.read_point_code,
      startedAt: row.started_at,
      ordinal: row.ordinal,
    }),
    site: { code: row.site_code, name: row.site_name },
    readPoint: { code: row.read_point_code, name: row.read_point_name },
    startedAt: row.started_at.toISOString(),
    endedAt: row.ended_at.toISOString(),
    direction: row.direction as PassView['direction'],
    directionBasis: row.direction_basis as PassView['directionBasis'],
    speedKmh: row.speed_kmh,
    units: units.map(({ unit_id: id, kind }, index) => ({
      position: index + 1,
      unitId: names.get(id)?.unitId ?? null,
      display: names.get(id)?.display ?? null,
      kind: kind as PassView['units'][number]['kind'],
    })),
  };
}
