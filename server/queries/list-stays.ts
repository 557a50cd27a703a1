import { z } from 'zod';
import type { MovementsQuery } from '../contract/movements.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { ask, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';
import type { StayRecord } from '../presenters/movements.js';

/** Whose history is asked for; `siteIds` null: all of it, else what happened at these sites. */
export interface HistoryOf {
  unitId: number;
  siteIds: number[] | null;
}

export interface StayRow extends StayRecord {
  site_id: number;
}

const cursorSchema = z.object({ seen: z.number().min(0).max(8.64e15), site: z.int() });

/** Stays that overlap the span, oldest first. */
export async function listStays(
  db: Database,
  history: HistoryOf,
  query: MovementsQuery,
): Promise<{ rows: StayRow[]; next: string | null }> {
  const { from, to, limit } = query;
  const cursor = readCursor(query.cursor, cursorSchema);
  const conditions = [
    sql`st.unit_id = ${history.unitId}`,
    history.siteIds && sql`st.site_id IN (${history.siteIds})`,
    from ? sql`(st.departed_at IS NULL OR st.departed_at > ${from})` : null,
    to ? sql`COALESCE(st.arrived_at, st.first_seen_at) < ${to}` : null,
    cursor && afterStay(new Date(cursor.seen), cursor.site),
  ];
  const rows = await ask<StayRow>(
    db,
    sql`SELECT st.*, s.code AS site_code, s.name AS site_name
      FROM stays st JOIN sites s ON s.id = st.site_id
      WHERE ${all(conditions)}
      ORDER BY st.first_seen_at, st.site_id LIMIT ${limit + 1}`,
  );
  return pageFrom(rows, limit, (last) => ({
    seen: last.first_seen_at.getTime(),
    site: last.site_id,
  }));
}

const afterStay = (seenAt: Date, siteId: number): Sql =>
  sql`st.first_seen_at >= ${seenAt} AND (st.first_seen_at > ${seenAt} OR st.site_id > ${siteId})`;
