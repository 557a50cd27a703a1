import { z } from 'zod';
import type { HeldReadsQuery } from '../contract/held-reads.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import type { HeldReadRecord } from '../presenters/held-read.js';
import { ask, sql, word, type Sql } from './sql.js';
import { all } from './unit-filters.js';

const cursorSchema = z.object({
  at: z.number().min(0).max(8.64e15),
  batch: z.int(),
  seq: z.int(),
});

type Row = HeldReadRecord & { batch_id: number; seq: number };

/**
 * Reads set aside for one reason, of one site when its id is given: latest time first, along the
 * index that the filter names. One statement.
 */
export async function listHeldReads(
  db: Database,
  siteId: number | undefined,
  query: Pick<HeldReadsQuery, 'code' | 'limit' | 'cursor'>,
): Promise<{ rows: HeldReadRecord[]; next: string | null }> {
  const cursor = readCursor(query.cursor, cursorSchema);
  const conditions = [
    siteId === undefined ? null : sql`h.site_id = ${siteId}`,
    sql`h.code = ${query.code}`,
    cursor && before(cursor),
  ];
  const rows = await ask<Row>(
    db,
    heldReadsSelect({
      index: siteId === undefined ? 'held_code' : 'held_site',
      where: all(conditions),
      limit: query.limit + 1,
    }),
  );
  return pageFrom(rows, query.limit, ({ read_at, batch_id, seq }) => ({
    at: read_at.getTime(),
    batch: batch_id,
    seq,
  }));
}

/** Selects `HeldReadRecord`s, latest first; the ledger is asked only for those that go out. */
export function heldReadsSelect({
  index,
  where,
  limit,
}: {
  index: 'held_code' | 'held_site';
  where: Sql;
  limit: number;
}): Sql {
  return sql`SELECT STRAIGHT_JOIN h.batch_id, h.seq, h.code, h.site_id, s.code AS site_code,
      s.name AS site_name, r.antenna_no, h.tag, h.read_at, r.received_at
    FROM held h FORCE INDEX (${word(index)})
    JOIN sites s ON s.id = h.site_id
    JOIN \`reads\` r ON r.batch_id = h.batch_id AND r.seq = h.seq AND r.read_at = h.read_at
    WHERE ${where} ORDER BY h.read_at DESC, h.batch_id DESC, h.seq DESC LIMIT ${limit}`;
}

function before({ at, batch, seq }: z.output<typeof cursorSchema>): Sql {
  const readAt = new Date(at);
  return sql`h.read_at <= ${readAt} AND (h.read_at < ${readAt} OR h.batch_id < ${batch}
    OR (h.batch_id = ${batch} AND h.seq < ${seq}))`;
}
