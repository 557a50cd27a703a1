import { z } from 'zod';
import type { SightingsQuery } from '../contract/movements.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { readPointOfSites } from './find-openable-units.js';
import type { HistoryOf } from './list-stays.js';
import { ask, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';
import type { PassageRecord } from '../presenters/sighting.js';

/** One passage of the unit with the names of where it was. `evidence` is JSON. */
export interface PassageRow extends PassageRecord {
  read_point_id: number;
  evidence: string;
}

interface PassRow {
  read_point_id: number;
  pass_started_at: Date;
  pass_ordinal: number;
  began_at: Date;
}

const cursorSchema = z.object({
  began: z.number().min(0).max(8.64e15),
  point: z.int(),
  started: z.number().min(0).max(8.64e15),
  ordinal: z.int(),
});

/** The unit's passages by pass, latest pass first; each pass whole on one page. */
export async function listSightings(
  db: Database,
  history: HistoryOf,
  query: SightingsQuery,
): Promise<{ sightings: PassageRow[][]; next: string | null }> {
  const { rows: passes, next } = await listPasses(db, history, query);
  if (passes.length === 0) return { sightings: [], next };
  const started = passes.map((pass) => pass.pass_started_at.getTime());
  const [earliest, latest] = [new Date(Math.min(...started)), new Date(Math.max(...started))];
  const passages = await ask<PassageRow>(
    db,
    sql`SELECT ${passageColumns} FROM ${passageTables}
      WHERE ${all(passageConditions(history))} AND p.first_at >= ${earliest}
        AND p.pass_started_at BETWEEN ${earliest} AND ${latest}
      ORDER BY p.first_at, p.read_point_id`,
  );
  const byPass = new Map<string, PassageRow[]>(passes.map((pass) => [passKeyOf(pass), []]));
  for (const passage of passages) byPass.get(passKeyOf(passage))?.push(passage);
  return { sightings: [...byPass.values()], next };
}

/** Columns of a PassageRow out of `passageTables`. */
export const passageColumns: Sql = sql`
  p.read_point_id, rp.site_id, rs.code AS site_code, rs.name AS site_name,
  rp.code AS read_point_code, rp.name AS read_point_name, rp.track AS read_point_track,
  p.first_at, p.last_at, p.pass_started_at, p.pass_ordinal, p.direction, p.direction_basis,
  p.role, p.speed_kmh, p.read_count, p.evidence`;

export const passageTables: Sql = sql`
  passages p JOIN read_points rp ON rp.id = p.read_point_id JOIN sites rs ON rs.id = rp.site_id`;

/** The passages `p` of the unit that this history shows. */
export function passageConditions({ unitId, siteIds }: HistoryOf): (Sql | null)[] {
  return [sql`p.unit_id = ${unitId}`, siteIds && readPointOfSites(siteIds)];
}

async function listPasses(db: Database, history: HistoryOf, query: SightingsQuery) {
  const { from, to, limit } = query;
  const cursor = readCursor(query.cursor, cursorSchema);
  const conditions = [
    ...passageConditions(history),
    from ? sql`p.last_at >= ${from}` : null,
    to ? sql`p.first_at < ${to}` : null,
    cursor && sql`p.first_at <= ${new Date(cursor.began)}`,
  ];
  const rows = await ask<PassRow>(
    db,
    sql`SELECT p.read_point_id, p.pass_started_at, p.pass_ordinal, MIN(p.first_at) AS began_at
      FROM ${passageTables} WHERE ${all(conditions)}
      GROUP BY p.read_point_id, p.pass_started_at, p.pass_ordinal
      ${cursor ? sql`HAVING ${beforePass(cursor)}` : sql``}
      ORDER BY began_at DESC, p.read_point_id DESC, p.pass_started_at DESC, p.pass_ordinal DESC
      LIMIT ${limit + 1}`,
  );
  return pageFrom(rows, limit, (last) => ({
    began: last.began_at.getTime(),
    point: last.read_point_id,
    started: last.pass_started_at.getTime(),
    ordinal: last.pass_ordinal,
  }));
}

function beforePass({ began, point, started, ordinal }: z.infer<typeof cursorSchema>): Sql {
  const [beganAt, startedAt] = [new Date(began), new Date(started)];
  return sql`(began_at < ${beganAt} OR (began_at = ${beganAt} AND (p.read_point_id < ${point}
    OR (p.read_point_id = ${point} AND (p.pass_started_at < ${startedAt}
    OR (p.pass_started_at = ${startedAt} AND p.pass_ordinal < ${ordinal}))))))`;
}

function passKeyOf(row: {
  read_point_id: number;
  pass_started_at: Date;
  pass_ordinal: number;
}): string {
  return `${row.read_point_id} ${row.pass_started_at.getTime()} ${row.pass_ordinal}`;
}
