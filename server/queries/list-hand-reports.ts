import { z } from 'zod';
import type { HandReportsQuery } from '../contract/hand-reports.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { HandReportRecord } from '../presenters/hand-report.js';
import { ask, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';

const cursorSchema = z.object({ at: z.number().min(0).max(8.64e15), id: z.uuid() });

/** Columns of a HandReportRecord out of `handReportTables`. */
export const handReportColumns: Sql = sql`
  h.id, h.unit_compact, h.at, h.track, h.position, h.seen, h.received_at, rp.name AS reported_by,
  r.retracted_at, tp.name AS retracted_by`;

/** Reports by eye `h`, each with what took it back and the names of the people. */
export const handReportTables: Sql = sql`
  hand_reports h
  LEFT JOIN people rp ON rp.id = h.reported_by
  LEFT JOIN hand_retractions r ON r.report_id = h.id
  LEFT JOIN people tp ON tp.id = r.retracted_by`;

/** What was seen by eye at a site, latest first; what was taken back stands among it. */
export async function listHandReports(
  db: Database,
  siteId: number,
  { unit, limit, cursor }: HandReportsQuery,
): Promise<{ rows: HandReportRecord[]; next: string | null }> {
  const after = readCursor(cursor, cursorSchema);
  const conditions = [
    sql`h.site_id = ${siteId}`,
    unit ? sql`h.unit_compact = ${unit}` : null,
    after && beforeReport(new Date(after.at), after.id),
  ];
  const rows = await ask<HandReportRecord>(
    db,
    sql`SELECT ${handReportColumns} FROM ${handReportTables} WHERE ${all(conditions)}
      ORDER BY h.at DESC, h.id DESC LIMIT ${limit + 1}`,
  );
  return pageFrom(rows, limit, ({ at, id }) => ({ at: at.getTime(), id }));
}

const beforeReport = (at: Date, id: string): Sql =>
  sql`h.at <= ${at} AND (h.at < ${at} OR h.id < ${id})`;
