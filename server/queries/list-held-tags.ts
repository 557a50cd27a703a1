import { z } from 'zod';
import type { HeldTagsQuery } from '../contract/held-reads.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { HeldTagRecord } from '../presenters/held-read.js';
import { ask, sql } from './sql.js';

/** Tags whose reads are set aside for one reason, at all sites, by tag. One statement. */
export async function listHeldTags(
  db: Database,
  query: HeldTagsQuery,
): Promise<{ rows: HeldTagRecord[]; next: string | null }> {
  const after = readCursor(query.cursor, z.base64());
  const further = after === null ? sql`` : sql`AND tag > ${Buffer.from(after, 'base64')}`;
  const rows = await ask<HeldTagRecord>(
    db,
    sql`SELECT tag, COUNT(*) AS count, MIN(read_at) AS oldest_at, MAX(read_at) AS newest_at
      FROM held FORCE INDEX (held_code_tag) WHERE code = ${query.code} ${further}
      GROUP BY tag ORDER BY tag LIMIT ${query.limit + 1}`,
  );
  return pageFrom(rows, query.limit, ({ tag }) => tag.toString('base64'));
}
