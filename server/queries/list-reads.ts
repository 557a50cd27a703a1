import { z } from 'zod';
import type { ReadsQuery } from '../contract/movements.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import {
  passageColumns,
  passageConditions,
  passageTables,
  type PassageRow,
} from './list-sightings.js';
import type { HistoryOf } from './list-stays.js';
import { countReads, unpackEvidence } from '../domain/movements/pack-evidence.js';
import { ask, joinSql, sql, type Sql } from './sql.js';
import { all } from './unit-filters.js';

export interface RawReadRow {
  antenna_no: number;
  tag: Buffer;
  read_at: Date;
  rssi: number | null;
  read_count: number | null;
  received_at: Date;
  passage: PassageRow;
}

type LedgerRow = Omit<RawReadRow, 'passage'> & { place: number };

const cursorSchema = z.object({
  first: z.number().min(0).max(8.64e15),
  point: z.int(),
  read: z.number().min(0).max(8.64e15),
  antenna: z.int(),
  tag: z.string().max(200),
});
type Cursor = z.infer<typeof cursorSchema>;

/**
 * Reads of the ledger that made the unit's passages: latest passage first, in it the latest read
 * first. The ledger is entered only along its natural key, passage by passage.
 */
export async function listReads(
  db: Database,
  history: HistoryOf,
  query: ReadsQuery,
): Promise<{ rows: RawReadRow[]; next: string | null }> {
  const cursor = readCursor(query.cursor, cursorSchema);
  const passages = await passagesFrom(db, history, query, cursor);
  if (passages.length === 0) return { rows: [], next: null };
  const selects = passages.map((passage, place) =>
    ledgerSelect(passage, place, query, place === 0 ? cursor : null),
  );
  const found = await ask<LedgerRow>(
    db,
    sql`${joinSql(selects, 'UNION')} ORDER BY place, read_at DESC, antenna_no DESC, tag DESC
      LIMIT ${query.limit + 1}`,
  );
  const rows = found.flatMap(({ place, ...row }) => {
    const passage = passages[place];
    return passage ? [{ ...row, passage }] : [];
  });
  return pageFrom(rows, query.limit, cursorOf);
}

/** Enough passages for a page, since each has a read; the one the cursor names comes first. */
function passagesFrom(
  db: Database,
  history: HistoryOf,
  { from, to, limit }: ReadsQuery,
  cursor: Cursor | null,
): Promise<PassageRow[]> {
  const conditions = [
    ...passageConditions(history),
    from ? sql`p.last_at >= ${from}` : null,
    to ? sql`p.first_at < ${to}` : null,
    cursor && fromPassage(new Date(cursor.first), cursor.point),
  ];
  return ask<PassageRow>(
    db,
    sql`SELECT ${passageColumns} FROM ${passageTables} WHERE ${all(conditions)}
      ORDER BY p.first_at DESC, p.read_point_id DESC LIMIT ${limit + 2}`,
  );
}

const fromPassage = (firstAt: Date, readPointId: number): Sql =>
  sql`p.first_at <= ${firstAt} AND (p.first_at < ${firstAt} OR p.read_point_id <= ${readPointId})`;

function ledgerSelect(
  passage: PassageRow,
  place: number,
  { from, to, limit }: ReadsQuery,
  cursor: Cursor | null,
): Sql {
  const runs = countReads(unpackEvidence(passage.evidence));
  const antennas = [...new Set(runs.map((run) => run.antenna))];
  const tags = [...new Set(runs.map((run) => run.tag))].map((tag) => Buffer.from(tag));
  const conditions = [
    sql`r.site_id = ${passage.site_id} AND r.antenna_no IN (${antennas})`,
    sql`r.read_at BETWEEN ${passage.first_at} AND ${passage.last_at} AND r.tag IN (${tags})`,
    from ? sql`r.read_at >= ${from}` : null,
    to ? sql`r.read_at < ${to}` : null,
    cursor && beforeRead(cursor),
  ];
  return sql`(
    SELECT ${place} AS place, r.antenna_no, r.tag, r.read_at, r.rssi, r.read_count, r.received_at
    FROM \`reads\` r FORCE INDEX (reads_natural) WHERE ${all(conditions)}
    ORDER BY r.read_at DESC, r.antenna_no DESC, r.tag DESC LIMIT ${limit + 1})`;
}

function beforeRead({ read, antenna, tag }: Cursor): Sql {
  const [readAt, bytes] = [new Date(read), Buffer.from(tag, 'base64')];
  return sql`(r.read_at < ${readAt} OR (r.read_at = ${readAt} AND (r.antenna_no < ${antenna}
    OR (r.antenna_no = ${antenna} AND r.tag < ${bytes}))))`;
}

function cursorOf({ passage, read_at, antenna_no, tag }: RawReadRow): Cursor {
  return {
    first: passage.first_at.getTime(),
    point: passage.read_point_id,
    read: read_at.getTime(),
    antenna: antenna_no,
    tag: tag.toString('base64'),
  };
}
