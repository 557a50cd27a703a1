import { z } from 'zod';
import { underWrongClocks } from '../domain/statistics/wrong-clocks.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { DoubtRecord } from '../presenters/doubt.js';
import { readPointOfSites } from './find-openable-units.js';
import type { HistoryOf } from './list-stays.js';
import { ask, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';

/** A doubt with the units that it is about and where; `kind` is computed when asked. */
export interface DoubtRow extends DoubtRecord {
  unit_id: number;
  site_id: number;
}

type StoredRow = Omit<DoubtRow, 'kind'> & { read_point_id: number };

interface Page {
  limit: number;
  cursor?: string | undefined;
}

const cursorSchema = z.object({
  at: z.number().min(0).max(8.64e15),
  unit: z.int(),
  point: z.int(),
});

const DAY_MS = 86_400_000;

/** Doubts of one unit at sites in sight, the latest first, settled ones too. */
export function listUnitDoubts(db: Database, { unitId, siteIds }: HistoryOf, page: Page) {
  const seesBefore = siteIds ? sql`(${readPointOfSites(siteIds, sql`pp`)})` : sql`TRUE`;
  const where = [sql`d.unit_id = ${unitId}`, siteIds && readPointOfSites(siteIds)];
  return listDoubts(db, where, seesBefore, page);
}

/** Everybody's doubts since an instant that nothing has settled, the latest first. */
export function listOpenDoubts(db: Database, since: Date, page: Page) {
  const where = [sql`d.at >= ${since} AND d.corroborated_by IS NULL`];
  return listDoubts(db, where, sql`TRUE`, page);
}

async function listDoubts(
  db: Database,
  where: readonly (Sql | null)[],
  seesBefore: Sql,
  { limit, cursor }: Page,
): Promise<{ rows: DoubtRow[]; next: string | null }> {
  const after = readCursor(cursor, cursorSchema);
  const rows = await ask<StoredRow>(
    db,
    sql`SELECT d.unit_id, d.at, d.read_point_id, rp.code AS read_point_code,
        rp.name AS read_point_name, rp.site_id, s.code AS site_code, s.name AS site_name,
        d.corroborated_by, ${seesBefore} AS sees_before, d.previous_at, d.rail_metres,
        pp.code AS previous_point_code, pp.name AS previous_point_name,
        ps.code AS previous_site_code, ps.name AS previous_site_name
      FROM doubts d JOIN read_points rp ON rp.id = d.read_point_id JOIN sites s ON s.id = rp.site_id
      JOIN read_points pp ON pp.id = d.previous_read_point_id JOIN sites ps ON ps.id = pp.site_id
      WHERE ${all([...where, after && beforeDoubt(after)])}
      ORDER BY d.at DESC, d.unit_id DESC, d.read_point_id DESC LIMIT ${limit + 1}`,
  );
  const page = pageFrom(rows, limit, (last) => ({
    at: last.at.getTime(),
    unit: last.unit_id,
    point: last.read_point_id,
  }));
  const clocked = await underClocksOf(db, page.rows);
  const kindOf = (row: StoredRow) => (clocked.has(keyOf(row)) ? 'clock' : 'tag');
  return { ...page, rows: page.rows.map((row) => ({ ...row, kind: kindOf(row) })) };
}

function beforeDoubt({ at, unit, point }: z.infer<typeof cursorSchema>): Sql {
  const instant = new Date(at);
  return sql`d.at <= ${instant} AND (d.at < ${instant} OR d.unit_id < ${unit}
    OR (d.unit_id = ${unit} AND d.read_point_id < ${point}))`;
}

/** Keys of those of the doubts that a wrong clock explains, judged with all of their sites' days. */
async function underClocksOf(db: Database, rows: readonly StoredRow[]): Promise<Set<string>> {
  if (rows.length === 0) return new Set();
  const times = rows.map((row) => row.at.getTime());
  const [from, to] = [Math.min(...times) - DAY_MS, Math.max(...times) + DAY_MS];
  const siteIds = [...new Set(rows.map((row) => row.site_id))];
  const around = await loadDoubted(
    db,
    sql`rp.site_id IN (${siteIds}) AND d.at BETWEEN ${new Date(from)} AND ${new Date(to)}`,
  );
  return new Set([...underWrongClocks(around)].map((doubt) => doubt.key));
}

/** How many there are, of how many units, and at which sites a wrong clock would explain them. */
export async function countOpenDoubts(db: Database, since: Date) {
  const doubts = await loadDoubted(db, sql`d.at >= ${since}`);
  const units = new Map<number, Set<number>>();
  for (const { siteId, unitId } of underWrongClocks(doubts)) {
    units.set(siteId, (units.get(siteId) ?? new Set()).add(unitId));
  }
  const names = units.size
    ? await ask<{ id: number; code: string; name: string }>(
        db,
        sql`SELECT id, code, name FROM sites WHERE id IN (${[...units.keys()]}) ORDER BY name`,
      )
    : [];
  return {
    doubts: doubts.length,
    units: new Set(doubts.map((doubt) => doubt.unitId)).size,
    clocks: names.map(({ id, code, name }) => ({ code, name, units: units.get(id)?.size ?? 0 })),
  };
}

async function loadDoubted(db: Database, where: Sql) {
  const rows = await ask<Pick<StoredRow, 'unit_id' | 'site_id' | 'at' | 'read_point_id'>>(
    db,
    sql`SELECT d.unit_id, rp.site_id, d.at, d.read_point_id
      FROM doubts d JOIN read_points rp ON rp.id = d.read_point_id
      WHERE d.corroborated_by IS NULL AND ${where}`,
  );
  return rows.map((row) => ({
    siteId: row.site_id,
    unitId: row.unit_id,
    at: row.at.getTime(),
    key: keyOf(row),
  }));
}

const keyOf = (row: Pick<StoredRow, 'unit_id' | 'at' | 'read_point_id'>): string =>
  `${row.unit_id} ${row.at.getTime()} ${row.read_point_id}`;
