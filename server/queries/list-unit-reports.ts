import { z } from 'zod';
import type { UnitReportsQuery } from '../contract/unit-reports.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { UnitReportRecord } from '../presenters/unit-report.js';
import { handReportColumns, handReportTables } from './list-hand-reports.js';
import type { HistoryOf } from './list-stays.js';
import { ask, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';

const cursorSchema = z.object({
  at: z.number().min(0).max(8.64e15),
  kind: z.enum(['hand', 'movement']),
  id: z.string().max(40),
});
type Cursor = z.infer<typeof cursorSchema>;

/**
 * What was reported of a unit under any of the identities it had at that time, latest first:
 * movement reports and reports by eye, those taken back among them.
 */
export async function listUnitReports(
  db: Database,
  history: HistoryOf,
  { limit, cursor }: UnitReportsQuery,
): Promise<{ rows: UnitReportRecord[]; next: string | null }> {
  const after = readCursor(cursor, cursorSchema);
  const [hand, movement] = await Promise.all([
    handReports(db, history, limit, after),
    movementReports(db, history, limit, after),
  ]);
  const rows = [...hand, ...movement].sort(latestFirst).slice(0, limit + 1);
  return pageFrom(rows, limit, ({ kind, at, id }) => ({ kind, at: at.getTime(), id: String(id) }));
}

type Report<Kind> = Extract<UnitReportRecord, { kind: Kind }>;

/** By time; at one time reports by eye first, each kind by id. */
function latestFirst(a: UnitReportRecord, b: UnitReportRecord): number {
  if (a.at.getTime() !== b.at.getTime()) return b.at.getTime() - a.at.getTime();
  if (a.kind !== b.kind) return a.kind === 'hand' ? -1 : 1;
  return a.id < b.id ? 1 : -1;
}

/** Identities `i` of the unit as of the report's own time. */
const ofUnit = ({ unitId, siteIds }: HistoryOf, at: Sql, siteId: Sql): (Sql | null)[] => [
  sql`i.unit_id = ${unitId}`,
  sql`(i.valid_from IS NULL OR i.valid_from <= ${at})`,
  sql`(i.valid_to IS NULL OR i.valid_to > ${at})`,
  siteIds && sql`${siteId} IN (${siteIds})`,
];

async function handReports(db: Database, history: HistoryOf, limit: number, after: Cursor | null) {
  const conditions = ofUnit(history, sql`h.at`, sql`h.site_id`);
  if (after) {
    const at = new Date(after.at);
    const later = after.kind === 'hand' ? sql`h.id < ${after.id}` : sql`FALSE`;
    conditions.push(sql`h.at <= ${at} AND (h.at < ${at} OR ${later})`);
  }
  return ask<Report<'hand'>>(
    db,
    sql`SELECT 'hand' AS kind, ${handReportColumns}, h.site_id, s.code AS site_code,
        s.name AS site_name
      FROM identities i JOIN (${handReportTables}) ON h.unit_compact = i.compact
      JOIN sites s ON s.id = h.site_id
      WHERE ${all(conditions)} ORDER BY h.at DESC, h.id DESC LIMIT ${limit + 1}`,
  );
}

async function movementReports(
  db: Database,
  history: HistoryOf,
  limit: number,
  after: Cursor | null,
) {
  const conditions = ofUnit(history, sql`m.at`, sql`m.site_id`);
  if (after) {
    const at = new Date(after.at);
    const later = after.kind === 'hand' ? sql`TRUE` : sql`m.id < ${Number(after.id)}`;
    conditions.push(sql`m.at <= ${at} AND (m.at < ${at} OR ${later})`);
  }
  return ask<Report<'movement'>>(
    db,
    sql`SELECT 'movement' AS kind, m.id, m.at, m.event, m.source, m.reference, m.received_at,
        m.organisation_id, o.code AS organisation_code, o.name AS organisation_name,
        s.code AS site_code, s.name AS site_name
      FROM identities i JOIN movement_reports m ON m.unit_compact = i.compact
      JOIN organisations o ON o.id = m.organisation_id JOIN sites s ON s.id = m.site_id
      WHERE ${all(conditions)} ORDER BY m.at DESC, m.id DESC LIMIT ${limit + 1}`,
  );
}
