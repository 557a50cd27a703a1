import type { DoubtView } from '../contract/doubts.js';

/** What `presentDoubt` takes: a row of `doubts` with the names of both places. */
export interface DoubtRecord {
  at: Date;
  site_code: string;
  site_name: string;
  read_point_code: string;
  read_point_name: string;
  corroborated_by: string | null;
  /** Zero: the earlier sighting was at a site that the person does not see. */
  sees_before: number;
  previous_at: Date;
  previous_site_code: string;
  previous_site_name: string;
  previous_point_code: string;
  previous_point_name: string;
  rail_metres: number;
  kind: DoubtView['kind'];
}

/** Two sightings that no train could join, of the unit that goes by this name. */
export function presentDoubt(
  row: DoubtRecord,
  { unitId, display }: { unitId: string; display: string },
): DoubtView {
  return {
    unitId,
    display,
    at: row.at.toISOString(),
    site: { code: row.site_code, name: row.site_name },
    readPoint: { code: row.read_point_code, name: row.read_point_name },
    previous: row.sees_before
      ? {
          at: row.previous_at.toISOString(),
          site: { code: row.previous_site_code, name: row.previous_site_name },
          readPoint: { code: row.previous_point_code, name: row.previous_point_name },
          railMetres: row.rail_metres,
        }
      : null,
    corroboratedBy: row.corroborated_by as DoubtView['corroboratedBy'],
    kind: row.kind,
  };
}
