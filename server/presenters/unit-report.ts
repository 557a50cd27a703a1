import type { ReportEvent } from '../contract/movement-reports.js';
import type { UnitReportView } from '../contract/unit-reports.js';
import { presentHandReport, type HandReportRecord } from './hand-report.js';

interface MovementReportRecord {
  kind: 'movement';
  id: number;
  at: Date;
  event: string;
  source: string;
  reference: string;
  received_at: Date;
  organisation_id: number;
  organisation_code: string;
  organisation_name: string;
  site_code: string;
  site_name: string;
}

interface UnitHandReportRecord extends HandReportRecord {
  kind: 'hand';
  site_id: number;
  site_code: string;
  site_name: string;
}

/** What `presentUnitReport` takes: a report of either kind with the names of its place. */
export type UnitReportRecord = MovementReportRecord | UnitHandReportRecord;

/** What the person may know and do beyond the fact itself. */
export interface ReportSight {
  /** Source and reference of what this organisation sent. */
  seesSource: (organisationId: number) => boolean;
  /** The names of the people at this site. */
  seesNames: (siteId: number) => boolean;
  mayRetract: (siteId: number) => boolean;
}

/** A report about a unit as the person may see it. */
export function presentUnitReport(row: UnitReportRecord, sight: ReportSight): UnitReportView {
  const site = { code: row.site_code, name: row.site_name };
  if (row.kind === 'hand') {
    const { kind, site_id: siteId, retracted_at: retractedAt } = row;
    const can = { retract: retractedAt === null && sight.mayRetract(siteId) };
    return { kind, ...presentHandReport(row, sight.seesNames(siteId)), site, can };
  }
  const isOpen = sight.seesSource(row.organisation_id);
  return {
    kind: row.kind,
    id: String(row.id),
    at: row.at.toISOString(),
    site,
    event: row.event as ReportEvent,
    organisation: { code: row.organisation_code, name: row.organisation_name },
    source: isOpen ? row.source : null,
    reference: isOpen ? row.reference : null,
    receivedAt: row.received_at.toISOString(),
  };
}
