import type { Pool } from 'mariadb';
import type { Lane } from '../domain/lanes.js';
import { WHEEL_REACH_MS } from '../domain/movements/own-direction.js';
import { loadReads, loadReleased, type StoredRead } from './load-reads.js';

/** Some of one lane of the queue, ready to fold: whole batches in the order they were taken in. */
export interface Work {
  lane: Lane;
  ids: number[];
  reads: StoredRead[];
  /** Read points whose wheel records came in, with the span they bear on (ms). */
  wheels: { readPointId: number; since: number; until: number }[];
  /** Identities that somebody reported on, with the instants they were seen at (ms). */
  reports: { compact: string; at: number }[];
  readCount: number;
}

interface WorkRow {
  id: number;
  kind: 'reads' | 'wheels' | 'released' | 'reports';
  read_count: number;
  payload: string | null;
}

const MOST_BATCHES = 500;

/**
 * Looks at the head of one lane of the queue, about `mostReads` reads of it (one batch at least);
 * null when it is empty. Nothing is locked, so ingest never waits: the caller deletes the rows by
 * `ids` in the transaction of their effects.
 */
export async function takeWork(pool: Pool, lane: Lane, mostReads: number): Promise<Work | null> {
  const queue = await pool.query<WorkRow[]>(
    'SELECT id, kind, read_count, payload FROM work WHERE lane = ? ORDER BY id LIMIT ?',
    [lane, MOST_BATCHES],
  );
  const taken: WorkRow[] = [];
  let readCount = 0;
  for (const row of queue) {
    if (taken.length && readCount + row.read_count > mostReads) break;
    taken.push(row);
    readCount += row.read_count;
  }
  if (taken.length === 0) return null;
  const ofKind = (kind: WorkRow['kind']) => taken.filter((row) => row.kind === kind);
  const batches = ofKind('reads').map((row) => row.id);
  const released = ofKind('released').flatMap(({ payload }) => parse<Released>(payload).reads);
  return {
    lane,
    ids: taken.map((row) => row.id),
    reads: [...(await loadReads(pool, batches)), ...(await loadReleased(pool, released))],
    wheels: ofKind('wheels').map(wheelSpan),
    reports: ofKind('reports').flatMap(({ payload }) =>
      parse<Reported>(payload).units.map(([compact, at]) => ({ compact, at: Date.parse(at) })),
    ),
    readCount,
  };
}

/** Batch, place in it, and time of each read that somebody released. */
interface Released {
  reads: [batchId: number, seq: number, readAt: string][];
}

interface Reported {
  units: [compact: string, at: string][];
}

function parse<T>(payload: string | null): T {
  return JSON.parse(payload ?? '{}') as T;
}

function wheelSpan({ payload }: WorkRow): Work['wheels'][number] {
  const { readPointId, startedAt, endedAt } = parse<{
    readPointId: number;
    startedAt: string;
    endedAt: string;
  }>(payload);
  const since = Date.parse(startedAt) - WHEEL_REACH_MS;
  return { readPointId, since, until: Date.parse(endedAt) + WHEEL_REACH_MS };
}
