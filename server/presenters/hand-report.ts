import type { HandReportView } from '../contract/hand-reports.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';

/** What `presentHandReport` takes: a row of `hand_reports` with names of people still there. */
export interface HandReportRecord {
  id: string;
  unit_compact: string;
  at: Date;
  track: string | null;
  position: number | null;
  seen: number;
  received_at: Date;
  reported_by: string | null;
  retracted_at: Date | null;
  retracted_by: string | null;
}

/** A report by eye; who made it and took it back only with `names`. */
export function presentHandReport(row: HandReportRecord, names: boolean): HandReportView {
  const parsed = parseUnit(row.unit_compact);
  return {
    id: row.id,
    unitId: row.unit_compact,
    display: parsed.kind === 'unit' ? parsed.identity.display : row.unit_compact,
    at: row.at.toISOString(),
    track: row.track,
    position: row.position,
    seen: Boolean(row.seen),
    by: names ? row.reported_by : null,
    receivedAt: row.received_at.toISOString(),
    retracted: row.retracted_at && {
      at: row.retracted_at.toISOString(),
      by: names ? row.retracted_by : null,
    },
  };
}
