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

/** What passages share that are shown as one sighting: their pass; of strays see `groupAt`. */
interface GroupRow {
  read_point_id: number;
  group_at: Date;
  group_no: number;
}

const cursorSchema = z.object({
  began: z.number().min(0).max(8.64e15),
  point: z.int(),
  group: z.number().min(0).max(8.64e15),
  no: z.int(),
});

const DAY_MS = 86_400_000;

/** Passages in a pass go by it; those beside the track by the UTC day, other strays stand alone. */
const groupAt = sql`COALESCE(p.pass_started_at,
  IF(p.stray = 'beside', CAST(DATE(p.first_at) AS DATETIME(3)), p.first_at))`;
const groupNo = sql`COALESCE(CAST(p.pass_ordinal AS SIGNED), IF(p.stray = 'beside', -1, -2))`;

/** The unit's passages by pass, latest pass first; each pass whole on one page. */
export async function listSightings(
  db: Database,
  history: HistoryOf,
  query: SightingsQuery,
): Promise<{ sightings: PassageRow[][]; next: string | null }> {
  const { rows: groups, next } = await listGroups(db, history, query);
  if (groups.length === 0) return { sightings: [], next };
  const started = groups.map((group) => group.group_at.getTime());
  const [earliest, latest] = [new Date(Math.min(...started)), new Date(Math.max(...started))];
  const passages = await ask<PassageRow & GroupRow>(
    db,
    sql`SELECT ${passageColumns}, ${groupAt} AS group_at, ${groupNo} AS group_no
      FROM ${passageTables}
      WHERE ${all(passageConditions(history))} AND p.first_at >= ${earliest}
        AND (p.pass_started_at BETWEEN ${earliest} AND ${latest} OR (p.pass_started_at IS NULL
          AND p.first_at < ${new Date(latest.getTime() + DAY_MS)}))
      ORDER BY p.first_at, p.read_point_id`,
  );
  const byGroup = new Map<string, PassageRow[]>(groups.map((group) => [keyOf(group), []]));
  for (const passage of passages) byGroup.get(keyOf(passage))?.push(passage);
  return { sightings: [...byGroup.values()], next };
}

/** Columns of a PassageRow out of `passageTables`. */
export const passageColumns: Sql = sql`
  p.read_point_id, rp.site_id, rs.code AS site_code, rs.name AS site_name,
  rp.code AS read_point_code, rp.name AS read_point_name, rp.track AS read_point_track,
  p.first_at, p.last_at, p.pass_started_at, p.pass_ordinal, p.direction, p.direction_basis,
  p.role, p.stray, p.speed_kmh, p.read_count, p.evidence, EXISTS (
    SELECT 1 FROM doubts d WHERE d.unit_id = p.unit_id AND d.at = p.first_at
      AND d.read_point_id = p.read_point_id AND d.corroborated_by IS NULL) AS doubted`;

export const passageTables: Sql = sql`
  passages p JOIN read_points rp ON rp.id = p.read_point_id JOIN sites rs ON rs.id = rp.site_id`;

/** The passages `p` of the unit that this history shows. */
export function passageConditions({ unitId, siteIds }: HistoryOf): (Sql | null)[] {
  return [sql`p.unit_id = ${unitId}`, siteIds && readPointOfSites(siteIds)];
}

async function listGroups(db: Database, history: HistoryOf, query: SightingsQuery) {
  const { from, to, limit } = query;
  const cursor = readCursor(query.cursor, cursorSchema);
  const conditions = [
    ...passageConditions(history),
    from ? sql`p.last_at >= ${from}` : null,
    to ? sql`p.first_at < ${to}` : null,
    cursor && sql`p.first_at <= ${new Date(cursor.began)}`,
  ];
  const rows = await ask<GroupRow & { began_at: Date }>(
    db,
    sql`SELECT p.read_point_id, ${groupAt} AS group_at, ${groupNo} AS group_no,
        MIN(p.first_at) AS began_at
      FROM ${passageTables} WHERE ${all(conditions)}
      GROUP BY p.read_point_id, group_at, group_no
      ${cursor ? sql`HAVING ${beforeGroup(cursor)}` : sql``}
      ORDER BY began_at DESC, p.read_point_id DESC, group_at DESC, group_no DESC
      LIMIT ${limit + 1}`,
  );
  const counted = rows.map((row) => ({ ...row, group_no: Number(row.group_no) }));
  return pageFrom(counted, limit, (last) => ({
    began: last.began_at.getTime(),
    point: last.read_point_id,
    group: last.group_at.getTime(),
    no: last.group_no,
  }));
}

function beforeGroup({ began, point, group, no }: z.infer<typeof cursorSchema>): Sql {
  const [beganAt, at] = [new Date(began), new Date(group)];
  return sql`(began_at < ${beganAt} OR (began_at = ${beganAt} AND (p.read_point_id < ${point}
    OR (p.read_point_id = ${point} AND (group_at < ${at}
    OR (group_at = ${at} AND group_no < ${no}))))))`;
}

function keyOf(row: GroupRow): string {
  return `${row.read_point_id} ${row.group_at.getTime()} ${row.group_no}`;
}
