import type { Pool } from 'mariadb';
import { WHEEL_REACH_MS } from '../domain/movements/own-direction.js';
import type { LedgerRead } from '../domain/movements/resolve-read.js';

/** Some of the queue, ready to fold: whole batches in the order they were taken in. */
export interface Work {
  ids: number[];
  reads: LedgerRead[];
  /** Read points whose wheel records came in, with the span they bear on (ms). */
  wheels: { readPointId: number; since: number; until: number }[];
  readCount: number;
}

interface WorkRow {
  id: number;
  kind: 'reads' | 'wheels';
  read_count: number;
  payload: string | null;
}

interface ReadRow {
  site_id: number;
  antenna_no: number;
  tag: Buffer;
  read_at: Date;
  hold_code: string | null;
}

const MOST_BATCHES = 500;

/**
 * The head of the queue up to about `mostReads` reads (one batch at least), or null when it is
 * empty. Takes no locks: the rows are deleted in the transaction of their effects.
 */
export async function takeWork(pool: Pool, mostReads: number): Promise<Work | null> {
  const queue = await pool.query<WorkRow[]>(
    'SELECT id, kind, read_count, payload FROM work ORDER BY id LIMIT ?',
    [MOST_BATCHES],
  );
  const taken: WorkRow[] = [];
  let readCount = 0;
  for (const row of queue) {
    if (taken.length && readCount + row.read_count > mostReads) break;
    taken.push(row);
    readCount += row.read_count;
  }
  if (taken.length === 0) return null;
  const batches = taken.filter((row) => row.kind === 'reads').map((row) => row.id);
  const wheels = taken.filter((row) => row.kind === 'wheels').map(wheelSpan);
  return {
    ids: taken.map((row) => row.id),
    reads: await loadReads(pool, batches),
    wheels,
    readCount,
  };
}

async function loadReads(pool: Pool, batches: readonly number[]): Promise<LedgerRead[]> {
  if (batches.length === 0) return [];
  const rows = await pool.query<ReadRow[]>(
    `SELECT site_id, antenna_no, tag, read_at, hold_code FROM \`reads\` WHERE batch_id IN (?)`,
    [batches],
  );
  return rows.map((row) => ({
    siteId: row.site_id,
    antenna: row.antenna_no,
    tag: row.tag.toString(),
    at: row.read_at.getTime(),
    holdCode: row.hold_code,
  }));
}

function wheelSpan(row: WorkRow): Work['wheels'][number] {
  const { readPointId, startedAt, endedAt } = JSON.parse(row.payload ?? '{}') as {
    readPointId: number;
    startedAt: string;
    endedAt: string;
  };
  const since = Date.parse(startedAt) - WHEEL_REACH_MS;
  return { readPointId, since, until: Date.parse(endedAt) + WHEEL_REACH_MS };
}
