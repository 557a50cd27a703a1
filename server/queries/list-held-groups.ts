import { z } from 'zod';
import { holdCodes, type HoldCode } from '../contract/ingest.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { HeldGroupRecord, HeldReadRecord } from '../presenters/held-read.js';
import { heldReadsSelect } from './list-held-reads.js';
import { ask, joinSql, sql } from './sql.js';

const cursorSchema = z.object({ site: z.int(), code: z.enum(holdCodes) });
const SAMPLE = 5;

type GroupRow = Omit<HeldGroupRecord, 'antennas' | 'sample'> & { site_id: number };

/**
 * What is set aside, by site and reason, with a sample of each. At most four statements; all but
 * the sample are answered from indexes.
 */
export async function listHeldGroups(
  db: Database,
  page: { limit: number; cursor?: string | undefined },
  now: Date,
): Promise<{ rows: HeldGroupRecord[]; next: string | null }> {
  const after = readCursor(page.cursor, cursorSchema);
  const where = after
    ? sql`WHERE site_id >= ${after.site} AND (site_id > ${after.site} OR code > ${after.code})`
    : sql``;
  const found = await ask<GroupRow>(
    db,
    sql`SELECT STRAIGHT_JOIN g.*, s.code AS site_code, s.name AS site_name FROM (
        SELECT site_id, code, COUNT(*) AS count, SUM(read_at > ${now}) AS ahead,
          MIN(read_at) AS oldest_at, MAX(read_at) AS newest_at
        FROM held FORCE INDEX (held_site) ${where}
        GROUP BY site_id, code ORDER BY site_id, code LIMIT ${page.limit + 1}
      ) g JOIN sites s ON s.id = g.site_id ORDER BY g.site_id, g.code`,
  );
  const { rows, next } = pageFrom(found, page.limit, ({ site_id, code }) => ({
    site: site_id,
    code,
  }));
  const [samples, antennas] = await Promise.all([samplesOf(db, rows), antennasOf(db, rows)]);
  const groups = rows.map((group) => ({
    ...group,
    antennas: group.code === 'unknown-antenna' ? (antennas.get(group.site_id) ?? []) : [],
    sample: samples.filter((row) => row.site_id === group.site_id && row.code === group.code),
  }));
  return { rows: groups, next };
}

/** How many reads are set aside for each reason that has some. */
export function countHeld(db: Database): Promise<{ code: HoldCode; count: number }[]> {
  return ask(db, sql`SELECT code, COUNT(*) AS count FROM held GROUP BY code ORDER BY code`);
}

async function samplesOf(db: Database, groups: GroupRow[]) {
  if (groups.length === 0) return [];
  const selects = groups.map(({ site_id, code }) => {
    const where = sql`h.site_id = ${site_id} AND h.code = ${code}`;
    return sql`(${heldReadsSelect({ index: 'held_site', where, limit: SAMPLE })})`;
  });
  return ask<HeldReadRecord & { site_id: number; code: HoldCode }>(
    db,
    sql`${joinSql(selects, 'UNION')} ORDER BY read_at DESC, batch_id DESC, seq DESC`,
  );
}

/**
 * Numbers without an antenna that sites have read by, by site. `held` does not know them; the
 * ledger's natural key answers with one step for each number.
 */
async function antennasOf(db: Database, groups: GroupRow[]): Promise<Map<number, number[]>> {
  const sites = groups.filter(({ code }) => code === 'unknown-antenna').map((row) => row.site_id);
  const numbers = new Map<number, number[]>(sites.map((site) => [site, []]));
  if (sites.length === 0) return numbers;
  const rows = await ask<{ site_id: number; antenna_no: number }>(
    db,
    sql`SELECT u.site_id, u.antenna_no FROM (
        SELECT DISTINCT site_id, antenna_no FROM \`reads\` WHERE site_id IN (${sites})
      ) u WHERE NOT EXISTS (
        SELECT 1 FROM antennas a WHERE a.site_id = u.site_id AND a.number = u.antenna_no
      ) ORDER BY u.site_id, u.antenna_no`,
  );
  for (const { site_id, antenna_no } of rows) numbers.get(site_id)?.push(antenna_no);
  return numbers;
}
