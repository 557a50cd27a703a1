import type { Database } from '../lib/database.js';
import type { HistoryOf, StayRow } from './list-stays.js';
import { ask, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';
import type { LegRecord } from '../presenters/movements.js';

export interface LegRow extends LegRecord {
  to_first_seen_at: Date;
  to_site_id: number;
}

interface Span {
  from?: Date | undefined;
  to?: Date | undefined;
}

/** Legs that ended in the span and led to one of the stays, oldest first. */
export async function listLegs(
  db: Database,
  history: HistoryOf,
  span: Span,
  stays: readonly StayRow[],
): Promise<LegRow[]> {
  const [first, last] = [stays[0], stays.at(-1)];
  if (!first || !last) return [];
  const rows = await ask<LegRow>(
    db,
    sql`SELECT lg.*, f.code AS from_code, f.name AS from_name, t.code AS to_code, t.name AS to_name
      FROM legs lg JOIN sites f ON f.id = lg.from_site_id JOIN sites t ON t.id = lg.to_site_id
      WHERE ${all(legConditions(history, span))}
        AND lg.to_first_seen_at BETWEEN ${first.first_seen_at} AND ${last.first_seen_at}
      ORDER BY lg.to_first_seen_at, lg.to_site_id`,
  );
  const keyOf = (seenAt: Date, siteId: number) => `${seenAt.getTime()} ${siteId}`;
  const shown = new Set(stays.map((stay) => keyOf(stay.first_seen_at, stay.site_id)));
  return rows.filter((row) => shown.has(keyOf(row.to_first_seen_at, row.to_site_id)));
}

/** Rail metres of all legs that ended in the span, so that adjoining spans add up. */
export async function sumRailMetres(db: Database, history: HistoryOf, span: Span): Promise<number> {
  const [row] = await ask<{ metres: number }>(
    db,
    sql`SELECT COALESCE(SUM(lg.rail_metres), 0) AS metres FROM legs lg
      WHERE ${all(legConditions(history, span))}`,
  );
  return row?.metres ?? 0;
}

function legConditions({ unitId, siteIds }: HistoryOf, { from, to }: Span): (Sql | null)[] {
  const endedAt = sql`COALESCE(lg.arrived_at, lg.to_first_seen_at)`;
  return [
    sql`lg.unit_id = ${unitId}`,
    siteIds && sql`lg.from_site_id IN (${siteIds}) AND lg.to_site_id IN (${siteIds})`,
    from ? sql`${endedAt} >= ${from}` : null,
    to ? sql`${endedAt} < ${to}` : null,
  ];
}
