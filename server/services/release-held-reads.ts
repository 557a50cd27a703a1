import type { PoolConnection } from 'mariadb';
import { byKeys, insertRows } from '../lib/bulk.js';
import type { Context } from '../lib/context.js';
import { withTransaction } from '../lib/database.js';
import type { Actor } from '../policies/actor.js';
import { ask, sql, type Sql } from '../queries/sql.js';
import { all } from '../queries/unit-filters.js';

/** What one transaction releases at most, so that ingest never waits long for it. */
const PORTION = 500;

interface HeldKey {
  batch_id: number;
  seq: number;
  read_at: Date;
}

export interface ReleaseOf {
  /** One site; all when absent. */
  siteId?: number;
  /** The latest time that is released; no bound when absent. */
  until?: Date | undefined;
}

/**
 * Releases reads that were set aside for a clock ahead, in portions that each stand for good, and
 * says how many this call released. What comes in meanwhile stays aside. Calls that meet share the
 * reads between them; after one that was cut off, another does the rest.
 */
export async function releaseHeldReads(
  { db, clock }: Pick<Context, 'db' | 'clock'>,
  actor: Pick<Actor, 'personId'>,
  { siteId, until }: ReleaseOf,
): Promise<number> {
  const [latest] = await ask<{ batch: number | null }>(
    db,
    sql`SELECT MAX(batch_id) AS batch FROM held`,
  );
  const conditions = [
    siteId === undefined ? null : sql`site_id = ${siteId}`,
    sql`code = 'clock-ahead' AND batch_id <= ${latest?.batch ?? 0}`,
    until ? sql`read_at <= ${until}` : null,
  ];
  let last: HeldKey | undefined;
  for (let released = 0; ;) {
    const keys = await ask<HeldKey>(
      db,
      sql`SELECT batch_id, seq, read_at FROM held
        WHERE ${all([...conditions, last ? after(last) : null])}
        ORDER BY read_at, batch_id, seq LIMIT ${PORTION}`,
    );
    if (keys.length === 0) return released;
    released += await withTransaction(db.pool, (connection) =>
      releasePortion(connection, keys, actor.personId, clock.now()),
    );
    last = keys.at(-1);
  }
}

/** Going on behind the last portion spares each the walk over what those before it deleted. */
function after({ read_at, batch_id, seq }: HeldKey): Sql {
  return sql`read_at >= ${read_at} AND (read_at > ${read_at} OR batch_id > ${batch_id}
    OR (batch_id = ${batch_id} AND seq > ${seq}))`;
}

/** Releases those of the reads that are still held, and answers how many that were. */
async function releasePortion(
  connection: PoolConnection,
  keys: HeldKey[],
  personId: number,
  now: Date,
): Promise<number> {
  // Two releases lock rows in one order, that of the key, so they wait for each other in no circle.
  const ordered = keys.toSorted((a, b) => a.batch_id - b.batch_id || a.seq - b.seq);
  const held = await byKeys<HeldKey>(
    connection,
    `SELECT batch_id, seq, read_at FROM held FORCE INDEX (PRIMARY)
      WHERE code = 'clock-ahead' AND (:keys) ORDER BY batch_id, seq FOR UPDATE`,
    'batch_id = ? AND seq = ?',
    ordered.map(({ batch_id, seq }) => [batch_id, seq]),
  );
  if (held.length === 0) return 0;
  await insertRows(
    connection,
    'releases',
    ['batch_id', 'seq', 'read_at', 'released_by', 'released_at'],
    held.map(({ batch_id, seq, read_at }) => [batch_id, seq, read_at, personId, now]),
  );
  // Row by row: one statement for all of them walks the whole of a short table and so waits for
  // rows that the door has only just put in.
  await connection.batch(
    'DELETE FROM held WHERE batch_id = ? AND seq = ?',
    held.map(({ batch_id, seq }) => [batch_id, seq]),
  );
  const reads = held.map(({ batch_id, seq, read_at }) => [batch_id, seq, read_at.toISOString()]);
  await connection.query(
    `INSERT INTO work (kind, lane, read_count, payload, received_at) VALUES ('released', 1, ?, ?, ?)`,
    [held.length, JSON.stringify({ reads }), now],
  );
  return held.length;
}
